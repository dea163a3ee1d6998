// SPDX-License-Identifier: GPL-3.0-or-later
#include "catalog/schema.hpp"

#include <SQLiteCpp/Backup.h>

#include "catalog/store.hpp"

namespace binwright {
namespace {

/// Step k makes version k + 1 of version k. A step that has been released never changes: a new one is added.
constexpr const char* kSteps[] = {
    // Version 1. AUTOINCREMENT: an id that was used once is never given again. The counter hands out lot numbers likewise.
    R"sql(
        CREATE TABLE part (
            id INTEGER PRIMARY KEY AUTOINCREMENT,
            family TEXT NOT NULL CHECK (family IN ('switch', 'rectifier', 'capacitor')),
            name TEXT NOT NULL COLLATE NOCASE UNIQUE CHECK (name <> ''),
            attributes TEXT NOT NULL,
            figures TEXT NOT NULL,
            starter INTEGER NOT NULL CHECK (starter IN (0, 1))
        ) STRICT;
        CREATE TABLE lot (
            id INTEGER PRIMARY KEY AUTOINCREMENT,
            number INTEGER NOT NULL UNIQUE CHECK (number > 0),
            part_id INTEGER NOT NULL REFERENCES part (id),
            count INTEGER NOT NULL CHECK (count >= 0),
            place TEXT NOT NULL,
            origin TEXT NOT NULL CHECK (origin IN ('new', 'surplus', 'pulled')),
            date_code TEXT NOT NULL,
            donor TEXT NOT NULL,
            note TEXT NOT NULL
        ) STRICT;
        CREATE INDEX lot_of_part ON lot (part_id);
        CREATE TABLE reading (
            id INTEGER PRIMARY KEY AUTOINCREMENT,
            lot_id INTEGER NOT NULL REFERENCES lot (id),
            figure TEXT NOT NULL,
            set_aside INTEGER NOT NULL CHECK (set_aside IN (0, 1))
        ) STRICT;
        CREATE INDEX reading_of_lot ON reading (lot_id);
        CREATE TABLE history (
            id INTEGER PRIMARY KEY AUTOINCREMENT,
            at TEXT NOT NULL,
            what TEXT NOT NULL,
            forward TEXT NOT NULL,
            backward TEXT NOT NULL,
            undone INTEGER NOT NULL CHECK (undone IN (0, 1))
        ) STRICT;
        CREATE TABLE counter (name TEXT PRIMARY KEY, value INTEGER NOT NULL) STRICT;
        INSERT INTO counter VALUES ('lot number', 0), ('revision', 0);
    )sql",
    // Version 2. What was undone when something new was done can never be redone, even when the new is undone in its turn.
    R"sql(
        ALTER TABLE history ADD COLUMN dropped INTEGER NOT NULL DEFAULT 0 CHECK (dropped IN (0, 1));
        UPDATE history SET dropped = 1 WHERE undone = 1 AND id < coalesce((SELECT max(id) FROM history WHERE undone = 0), 0);
    )sql",
};
static_assert(std::size(kSteps) == kSchemaVersion);

int pragma(SQLite::Database& database, const char* name) { return database.execAndGet(std::string("PRAGMA ") + name).getInt(); }

}  // namespace

void prepare_schema(SQLite::Database& database, const std::string& path, bool may_write) {
    const auto version_of = [&] {
        const int version = pragma(database, "user_version");
        const int application = pragma(database, "application_id");
        const int tables = database.execAndGet("SELECT count(*) FROM sqlite_master").getInt();
        const bool fresh = version == 0 && application == 0 && tables == 0;
        if (!fresh && application != kApplicationId) throw StoreError(path + " is a database, but not a bin; it was left as it is");
        if (version > kSchemaVersion)
            throw StoreError(path + " was written by a newer version of this program (schema " + std::to_string(version) + ", this one knows " +
                             std::to_string(kSchemaVersion) + "); it was left as it is");
        return version;
    };
    {
        SQLite::Transaction one_sight(database);  // of three things that another program may be changing together
        if (const int version = version_of(); version == kSchemaVersion) return;
        else if (!may_write)
            throw StoreError(path + (version == 0 ? " holds nothing yet" : " is of an older version; open it once for writing to bring it up"));
    }
    SQLite::Transaction transaction(database, SQLite::TransactionBehavior::IMMEDIATE);
    const int version = version_of();  // another program may have brought it up meanwhile
    if (version == kSchemaVersion) return;
    if (version != 0) {
        // Nobody else writes now, and nothing is written yet: a second reader sees the bin as it was.
        SQLite::Database source(path, SQLite::OPEN_READWRITE, 5000);
        SQLite::Database copy(path + ".before-schema-" + std::to_string(kSchemaVersion), SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE, 5000);
        SQLite::Backup backup(copy, source);
        backup.executeStep();
    }
    for (int step = version; step < kSchemaVersion; ++step) database.exec(kSteps[step]);
    database.exec("PRAGMA application_id = " + std::to_string(kApplicationId));
    database.exec("PRAGMA user_version = " + std::to_string(kSchemaVersion));
    transaction.commit();
}

}  // namespace binwright
