// SPDX-License-Identifier: GPL-3.0-or-later
#include "catalog/store.hpp"

#include <SQLiteCpp/SQLiteCpp.h>
#include <sqlite3.h>
#include <unistd.h>

#include <chrono>
#include <cmath>
#include <cstdlib>
#include <ctime>
#include <filesystem>
#include <thread>

#include "catalog/record_json.hpp"
#include "catalog/schema.hpp"

namespace binwright {
namespace {

std::string now() {
    const std::time_t t = std::chrono::system_clock::to_time_t(std::chrono::system_clock::now());
    std::tm utc{};
    gmtime_r(&t, &utc);
    char text[32];
    std::strftime(text, sizeof text, "%Y-%m-%dT%H:%M:%SZ", &utc);
    return text;
}

int flags(Store::Open how) {
    if (how == Store::Open::create) return SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE;
    return how == Store::Open::existing ? SQLite::OPEN_READWRITE : SQLite::OPEN_READONLY;
}

/// A reader that may write leaves no files of the write-ahead log behind; where it may not, it reads all the same.
int flags_here(const std::string& path, Store::Open how) {
    if (how == Store::Open::read_only && path != ":memory:" && access(path.c_str(), W_OK) == 0) return SQLite::OPEN_READWRITE;
    return flags(how);
}

PartRecord part_of(SQLite::Statement& row) {
    PartRecord record;
    record.id = row.getColumn(0).getInt64();
    record.part.family = find_family(row.getColumn(1).getString()).value_or(Family::capacitor);
    record.part.name = row.getColumn(2).getString();
    record.part.attributes = nlohmann::json::parse(row.getColumn(3).getString()).get<std::map<std::string, std::string>>();
    for (const auto& figure : nlohmann::json::parse(row.getColumn(4).getString()))
        record.part.figures.push_back(figure_from_json(figure, record.part.family));
    record.starter = row.getColumn(5).getInt() != 0;
    return record;
}

LotRecord lot_of(SQLite::Statement& row) {
    LotRecord lot;
    lot.id = row.getColumn(0).getInt64();
    lot.number = row.getColumn(1).getInt64();
    lot.part_id = row.getColumn(2).getInt64();
    lot.count = row.getColumn(3).getInt();
    lot.place = row.getColumn(4).getString();
    lot.origin = find_origin(row.getColumn(5).getString()).value_or(Origin::pulled);
    lot.date_code = row.getColumn(6).getString();
    lot.donor = row.getColumn(7).getString();
    lot.note = row.getColumn(8).getString();
    return lot;
}

constexpr const char* kPartColumns = "SELECT id, family, name, attributes, figures, starter FROM part";
constexpr const char* kLotColumns = "SELECT id, number, part_id, count, place, origin, date_code, donor, note FROM lot";

std::string figures_text(const Part& part) {
    nlohmann::json figures = nlohmann::json::array();
    for (const Figure& figure : part.figures) figures.push_back(to_json(figure));
    return figures.dump();
}

}  // namespace

struct Store::Inside {
    std::string path;
    SQLite::Database database;

    Inside(const std::string& file, Open how) : path(file), database(file, flags_here(file, how), 5000) {
        database.exec("PRAGMA foreign_keys = ON");
        prepare_schema(database, file, how != Open::read_only);
        if (how == Open::read_only) database.exec("PRAGMA query_only = ON");
        if (how != Open::read_only) {
            write_ahead();
            database.exec("PRAGMA synchronous = FULL");
        }
    }

    /// The change to a write-ahead log needs the bin alone, and does not wait for it by itself.
    void write_ahead() {
        for (int patience = 250;; --patience) {
            try {
                database.exec("PRAGMA journal_mode = WAL");
                return;
            } catch (const SQLite::Exception& error) {
                if (error.getErrorCode() != SQLITE_BUSY || patience == 0) throw;
                std::this_thread::sleep_for(std::chrono::milliseconds(20));
            }
        }
    }

    // ---- reading -------------------------------------------------------------------------------------------------

    template <class Read, class... Bound>
    auto rows(const std::string& sql, Read read, const Bound&... bound) {
        SQLite::Statement statement(database, sql);
        int index = 1;
        (statement.bind(index++, bound), ...);
        std::vector<decltype(read(statement))> found;
        while (statement.executeStep()) found.push_back(read(statement));
        return found;
    }
    template <class Row>
    static std::optional<Row> only(std::vector<Row> found) {
        if (found.empty()) return std::nullopt;
        return std::move(found.front());
    }
    std::optional<PartRecord> part(std::int64_t id) { return only(rows(std::string(kPartColumns) + " WHERE id = ?", part_of, id)); }
    std::optional<LotRecord> lot(std::int64_t id) { return only(rows(std::string(kLotColumns) + " WHERE id = ?", lot_of, id)); }
    Family family_of_lot(std::int64_t id) {
        SQLite::Statement statement(database, "SELECT family FROM part JOIN lot ON lot.part_id = part.id WHERE lot.id = ?");
        statement.bind(1, id);
        if (!statement.executeStep()) return Family::capacitor;
        return find_family(statement.getColumn(0).getString()).value_or(Family::capacitor);
    }
    std::optional<ReadingRecord> reading(std::int64_t id) {
        return only(rows(
            "SELECT id, lot_id, figure, set_aside FROM reading WHERE id = ?",
            [this](SQLite::Statement& row) { return reading_of(row); }, id));
    }
    ReadingRecord reading_of(SQLite::Statement& row) {
        ReadingRecord record;
        record.id = row.getColumn(0).getInt64();
        record.lot_id = row.getColumn(1).getInt64();
        record.figure = figure_from_json(nlohmann::json::parse(row.getColumn(2).getString()), family_of_lot(record.lot_id));
        record.set_aside = row.getColumn(3).getInt() != 0;
        return record;
    }
    std::optional<PartRecord> stored(const PartRecord& like) { return part(like.id); }
    std::optional<LotRecord> stored(const LotRecord& like) { return lot(like.id); }
    std::optional<ReadingRecord> stored(const ReadingRecord& like) { return reading(like.id); }

    // ---- writing -------------------------------------------------------------------------------------------------

    void remove(const PartRecord& part) { run("DELETE FROM part WHERE id = ?", part.id); }
    void remove(const LotRecord& lot) { run("DELETE FROM lot WHERE id = ?", lot.id); }
    void remove(const ReadingRecord& reading) { run("DELETE FROM reading WHERE id = ?", reading.id); }

    template <class... Bound>
    void run(const char* sql, const Bound&... bound) {
        SQLite::Statement statement(database, sql);
        int index = 1;
        (statement.bind(index++, bound), ...);
        statement.exec();
    }

    /// What JSON would write as null, and nothing could read again.
    static void check(const Figure& figure, Family family) {
        if (!find_symbol(info(figure.symbol).name, family))
            throw EditRefused(std::string(info(figure.symbol).name) + " is no figure of a " + std::string(to_string(family)));
        const Spread& value = figure.value;
        bool finite = std::isfinite(value.best) && std::isfinite(value.typical) && std::isfinite(value.worst);
        for (const auto& condition : {figure.at.voltage, figure.at.current, figure.at.frequency, figure.at.temperature})
            finite = finite && std::isfinite(condition.value_or(0));
        if (!finite) throw EditRefused("the " + std::string(info(figure.symbol).name) + " of this edit is not a number");
    }

    /// A row with the id it carries (0: a new one, given back in the record).
    void write(PartRecord& record, bool replace) {
        for (const Figure& figure : record.part.figures) check(figure, record.part.family);
        if (replace) keep_family(record);
        const std::string family(to_string(record.part.family)), attributes = nlohmann::json(record.part.attributes).dump(),
            figures = figures_text(record.part);
        if (replace) {
            run("UPDATE part SET family = ?, name = ?, attributes = ?, figures = ?, starter = ? WHERE id = ?", family, record.part.name, attributes,
                figures, record.starter ? 1 : 0, record.id);
            return;
        }
        if (record.id == 0) {
            run("INSERT INTO part (family, name, attributes, figures, starter) VALUES (?, ?, ?, ?, ?)", family, record.part.name, attributes, figures,
                record.starter ? 1 : 0);
            record.id = database.getLastInsertRowid();
        } else {
            run("INSERT INTO part VALUES (?, ?, ?, ?, ?, ?)", record.id, family, record.part.name, attributes, figures, record.starter ? 1 : 0);
        }
    }

    /// Readings carry figures of their part's family: a switch has no ESR.
    void keep_family(const PartRecord& after) {
        const auto before = part(after.id);
        if (!before || before->part.family == after.part.family) return;
        SQLite::Statement readings(database, "SELECT 1 FROM reading JOIN lot ON reading.lot_id = lot.id WHERE lot.part_id = ? LIMIT 1");
        readings.bind(1, after.id);
        if (readings.executeStep()) throw EditRefused("readings of its lots say that this type is a " + std::string(to_string(before->part.family)));
    }

    /// A lot with readings keeps to types of one family likewise.
    void keep_family(const LotRecord& after) {
        const auto type = part(after.part_id);
        SQLite::Statement readings(database, "SELECT 1 FROM reading WHERE lot_id = ? LIMIT 1");
        readings.bind(1, after.id);
        const Family family = family_of_lot(after.id);
        if (type->part.family != family && readings.executeStep())
            throw EditRefused("readings of this lot say that it is of a " + std::string(to_string(family)) + " type");
    }

    void write(LotRecord& lot, bool replace) {
        const std::string origin(to_string(lot.origin));
        if (lot.count < 0) throw EditRefused("a lot cannot hold " + std::to_string(lot.count) + " pieces");
        if (!part(lot.part_id)) throw EditRefused("the bin has no part type " + std::to_string(lot.part_id) + " for this lot");
        if (replace) {
            keep_family(lot);
            run("UPDATE lot SET number = ?, part_id = ?, count = ?, place = ?, origin = ?, date_code = ?, donor = ?, note = ? WHERE id = ?", lot.number,
                lot.part_id, lot.count, lot.place, origin, lot.date_code, lot.donor, lot.note, lot.id);
            return;
        }
        if (lot.number == 0) lot.number = database.execAndGet("SELECT value FROM counter WHERE name = 'lot number'").getInt64() + 1;
        run("UPDATE counter SET value = max(value, ?) WHERE name = 'lot number'", lot.number);
        if (lot.id == 0) {
            run("INSERT INTO lot (number, part_id, count, place, origin, date_code, donor, note) VALUES (?, ?, ?, ?, ?, ?, ?, ?)", lot.number,
                lot.part_id, lot.count, lot.place, origin, lot.date_code, lot.donor, lot.note);
            lot.id = database.getLastInsertRowid();
        } else {
            run("INSERT INTO lot VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)", lot.id, lot.number, lot.part_id, lot.count, lot.place, origin, lot.date_code,
                lot.donor, lot.note);
        }
    }

    void write(ReadingRecord& reading, bool replace) {
        if (!lot(reading.lot_id)) throw EditRefused("the bin has no lot for this reading");
        check(reading.figure, family_of_lot(reading.lot_id));
        const std::string figure = to_json(reading.figure).dump();
        if (replace) {
            run("UPDATE reading SET lot_id = ?, figure = ?, set_aside = ? WHERE id = ?", reading.lot_id, figure, reading.set_aside ? 1 : 0, reading.id);
        } else if (reading.id == 0) {
            run("INSERT INTO reading (lot_id, figure, set_aside) VALUES (?, ?, ?)", reading.lot_id, figure, reading.set_aside ? 1 : 0);
            reading.id = database.getLastInsertRowid();
        } else {
            run("INSERT INTO reading VALUES (?, ?, ?, ?)", reading.id, reading.lot_id, figure, reading.set_aside ? 1 : 0);
        }
    }

    // A part added earlier in the same edit is meant by a negative id: −1 the first change of the edit, −2 the second …
    template <class Record>
    static void resolve(Record&, const std::vector<std::int64_t>&) {}
    static std::int64_t resolved(std::int64_t id, const std::vector<std::int64_t>& given) {
        if (id >= 0) return id;
        const auto index = static_cast<std::size_t>(-id - 1);
        if (index >= given.size()) throw EditRefused("an edit refers to a later change of itself");
        return given[index];
    }
    static void resolve(LotRecord& lot, const std::vector<std::int64_t>& given) { lot.part_id = resolved(lot.part_id, given); }
    static void resolve(ReadingRecord& reading, const std::vector<std::int64_t>& given) { reading.lot_id = resolved(reading.lot_id, given); }

    template <class Record>
    std::int64_t apply_one(Change<Record>& change, const std::vector<std::int64_t>& given) {
        if (!change.before && !change.after) throw EditRefused("an edit changes nothing");
        if (change.before) {
            const auto present = stored(*change.before);
            if (!present) throw EditRefused("the bin no longer has what was to be changed");
            if (!(*present == *change.before)) throw EditRefused("the bin has changed meanwhile: what was to be changed is no longer as it was seen");
        }
        if (!change.after) {
            remove(*change.before);
            return change.before->id;
        }
        if (change.before) change.after->id = change.before->id;
        resolve(*change.after, given);
        if (!change.before && change.after->id != 0 && stored(*change.after)) throw EditRefused("the bin has this already");
        write(*change.after, change.before.has_value());
        return change.after->id;
    }

    /// Applies within the caller's transaction. @returns the edit with ids filled in
    Edit perform(Edit edit) {
        std::vector<std::int64_t> given;
        try {
            for (auto& change : edit.changes)
                given.push_back(std::visit([&](auto& inner) { return apply_one(inner, given); }, change));
        } catch (const SQLite::Exception& error) {
            switch (error.getExtendedErrorCode()) {
                case SQLITE_CONSTRAINT_UNIQUE: throw EditRefused("the bin has this name or number already");
                case SQLITE_CONSTRAINT_FOREIGNKEY: throw EditRefused("it is still in use: something in the bin refers to it");
                case SQLITE_CONSTRAINT_CHECK: throw EditRefused("a value lies outside what the bin can hold");
                default: throw;
            }
        }
        run("UPDATE counter SET value = value + 1 WHERE name = 'revision'");
        return edit;
    }
};

namespace {

Edit inverse(const Edit& done) {
    Edit back;
    back.what = "undo: " + done.what;
    for (auto change = done.changes.rbegin(); change != done.changes.rend(); ++change)
        back.changes.push_back(std::visit(
            [](const auto& inner) -> std::variant<Change<PartRecord>, Change<LotRecord>, Change<ReadingRecord>> {
                auto swapped = inner;
                std::swap(swapped.before, swapped.after);
                return swapped;
            },
            *change));
    return back;
}

void check_text(const Edit& edit) {
    try {
        (void)to_json(edit).dump();
        (void)nlohmann::json(edit.what).dump();
    } catch (const nlohmann::json::type_error&) {
        throw EditRefused("a text of this edit is not UTF-8");
    }
}

/// Runs `action`, turning the library's failures into sentences with the path.
template <class Action>
auto guarded(const std::string& path, Action action) -> decltype(action()) {
    try {
        return action();
    } catch (const SQLite::Exception& error) {
        if (error.getErrorCode() == SQLITE_BUSY || error.getErrorCode() == SQLITE_LOCKED)
            throw StoreError(path + " is in use by another program; nothing was changed");
        if (error.getErrorCode() == SQLITE_NOTADB) throw StoreError(path + " is not a bin; it was left as it is");
        if (error.getErrorCode() == SQLITE_READONLY) throw StoreError(path + " cannot be written");
        throw StoreError(path + ": " + error.what());
    } catch (const nlohmann::json::exception& error) {
        throw StoreError(path + " holds something that cannot be read: " + error.what());
    }
}

}  // namespace

Store::Store(const std::string& path, Open how) {
    std::error_code ignored;
    if (path != ":memory:") {
        const bool exists = std::filesystem::exists(path, ignored);
        if (how != Open::create && !exists) throw StoreError("there is no bin at " + path);
        if (std::filesystem::is_directory(path, ignored)) throw StoreError(path + " is a folder, not a bin");
        const auto folder = std::filesystem::path(path).parent_path();
        if (how == Open::create && !folder.empty()) {
            std::filesystem::create_directories(folder, ignored);
            if (ignored) throw StoreError("the folder " + folder.string() + " cannot be made: " + ignored.message());
        }
    }
    inside_ = guarded(path, [&] {
        try {
            return std::make_unique<Inside>(path, how);
        } catch (const SQLite::Exception& error) {
            if (error.getErrorCode() == SQLITE_CANTOPEN) throw StoreError(path + " cannot be opened");
            throw;
        }
    });
}

Store::~Store() = default;
Store::Store(Store&&) noexcept = default;
Store& Store::operator=(Store&&) noexcept = default;

Edit Store::apply(const Edit& edit) {
    return guarded(inside_->path, [&] {
        check_text(edit);
        SQLite::Transaction transaction(inside_->database, SQLite::TransactionBehavior::IMMEDIATE);
        const Edit done = inside_->perform(edit);
        const Edit back = inverse(done);
        inside_->run("UPDATE history SET dropped = 1 WHERE undone = 1");
        inside_->run("INSERT INTO history (at, what, forward, backward, undone) VALUES (?, ?, ?, ?, 0)", now(), edit.what, to_json(done).dump(),
                     to_json(back).dump());
        transaction.commit();
        return back;
    });
}

std::optional<HistoryEntry> Store::undo() {
    return guarded(inside_->path, [&]() -> std::optional<HistoryEntry> {
        SQLite::Transaction transaction(inside_->database, SQLite::TransactionBehavior::IMMEDIATE);
        SQLite::Statement newest(inside_->database, "SELECT id, at, what, backward FROM history WHERE undone = 0 ORDER BY id DESC LIMIT 1");
        if (!newest.executeStep()) return std::nullopt;
        HistoryEntry entry{newest.getColumn(0).getInt64(), newest.getColumn(1).getString(), newest.getColumn(2).getString(), true};
        (void)inside_->perform(edit_from_json(nlohmann::json::parse(newest.getColumn(3).getString())));
        inside_->run("UPDATE history SET undone = 1 WHERE id = ?", entry.id);
        newest.reset();
        transaction.commit();
        return entry;
    });
}

std::optional<HistoryEntry> Store::redo() {
    return guarded(inside_->path, [&]() -> std::optional<HistoryEntry> {
        SQLite::Transaction transaction(inside_->database, SQLite::TransactionBehavior::IMMEDIATE);
        SQLite::Statement next(inside_->database, "SELECT id, at, what, forward FROM history WHERE undone = 1 AND dropped = 0 ORDER BY id LIMIT 1");
        if (!next.executeStep()) return std::nullopt;
        HistoryEntry entry{next.getColumn(0).getInt64(), next.getColumn(1).getString(), next.getColumn(2).getString(), false};
        (void)inside_->perform(edit_from_json(nlohmann::json::parse(next.getColumn(3).getString())));
        inside_->run("UPDATE history SET undone = 0 WHERE id = ?", entry.id);
        next.reset();
        transaction.commit();
        return entry;
    });
}

std::vector<HistoryEntry> Store::history(int most) const {
    return guarded(inside_->path, [&] {
        return inside_->rows(
            "SELECT id, at, what, undone FROM history ORDER BY id DESC LIMIT ?",
            [](SQLite::Statement& row) {
                return HistoryEntry{row.getColumn(0).getInt64(), row.getColumn(1).getString(), row.getColumn(2).getString(), row.getColumn(3).getInt() != 0};
            },
            most);
    });
}

std::vector<PartRecord> Store::parts() const {
    return guarded(inside_->path, [&] { return inside_->rows(std::string(kPartColumns) + " ORDER BY id", part_of); });
}
std::vector<LotRecord> Store::lots() const {
    return guarded(inside_->path, [&] { return inside_->rows(std::string(kLotColumns) + " ORDER BY number", lot_of); });
}
std::vector<ReadingRecord> Store::readings(std::int64_t lot_id) const {
    return guarded(inside_->path, [&] {
        return inside_->rows(
            "SELECT id, lot_id, figure, set_aside FROM reading WHERE lot_id = ? ORDER BY id",
            [this](SQLite::Statement& row) { return inside_->reading_of(row); }, lot_id);
    });
}
std::optional<PartRecord> Store::part(std::int64_t id) const {
    return guarded(inside_->path, [&] { return inside_->part(id); });
}
std::optional<PartRecord> Store::part_named(std::string_view name) const {
    return guarded(inside_->path,
                   [&] { return Inside::only(inside_->rows(std::string(kPartColumns) + " WHERE name = ?", part_of, std::string(name))); });
}
std::optional<LotRecord> Store::lot(std::int64_t id) const {
    return guarded(inside_->path, [&] { return inside_->lot(id); });
}
std::optional<LotRecord> Store::lot_labelled(std::string_view label) const {
    std::size_t digits = 0;
    while (digits < label.size() && label[digits] >= '0' && label[digits] <= '9') ++digits;
    if (digits == 0 || digits > 15) return std::nullopt;
    const std::int64_t number = std::stoll(std::string(label.substr(0, digits)));
    std::string_view rest = label.substr(digits);
    if (!rest.empty() && rest.front() == '-') rest.remove_prefix(1);
    if (rest.size() > 1) return std::nullopt;
    if (!rest.empty()) {
        const char letter = rest[0] >= 'a' && rest[0] <= 'z' ? static_cast<char>(rest[0] - 'a' + 'A') : rest[0];
        if (letter < 'A' || letter > 'Z') return std::nullopt;
        const std::string right = lot_label(number);
        if (right.back() != letter)
            throw EditRefused("the check letter of " + std::string(label) + " does not fit its number (" + std::to_string(number) + " goes with " +
                              right.back() + "): read the label again");
    }
    return guarded(inside_->path, [&] { return Inside::only(inside_->rows(std::string(kLotColumns) + " WHERE number = ?", lot_of, number)); });
}

std::int64_t Store::revision() const {
    return guarded(inside_->path,
                   [&] { return static_cast<std::int64_t>(inside_->database.execAndGet("SELECT value FROM counter WHERE name = 'revision'").getInt64()); });
}

std::string default_bin_path() {
    if (const char* named = std::getenv("BINWRIGHT_BIN"); named != nullptr && *named != 0) return named;
    std::filesystem::path folder;
    if (const char* data = std::getenv("XDG_DATA_HOME"); data != nullptr && *data != 0) folder = data;
    else if (const char* home = std::getenv("HOME"); home != nullptr && *home != 0) folder = std::filesystem::path(home) / ".local" / "share";
    else folder = ".";
    return (folder / "binwright" / "bin.binwright").string();
}

}  // namespace binwright
