// SPDX-License-Identifier: GPL-3.0-or-later
// Properties of the bin under any sequence of edits: what is undone and redone, what a refused edit leaves, and two at once.
#include <SQLiteCpp/SQLiteCpp.h>
#include <rapidcheck/catch.h>
#include <sys/wait.h>
#include <unistd.h>

#include <catch2/catch.hpp>
#include <cmath>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <limits>
#include <set>
#include <sstream>

#include "catalog/store.hpp"

using namespace binwright;

namespace {

struct TempFolder {
    std::filesystem::path path;
    TempFolder() {
        // In memory where the system offers it: these tests write thousands of times, and every write of a bin waits for the disk.
        const bool memory = access("/dev/shm", W_OK) == 0;
        std::string pattern = ((memory ? std::filesystem::path("/dev/shm") : std::filesystem::temp_directory_path()) / "bin-edits-XXXXXX").string();
        path = mkdtemp(pattern.data());
    }
    ~TempFolder() { std::filesystem::remove_all(path); }
    [[nodiscard]] std::string file(const std::string& name) const { return (path / name).string(); }
};

/// Every row of every table as text, read past the store itself. `all` takes in the history and the counters as well.
std::string content(const std::string& path, bool all) {
    SQLite::Database database(path, SQLite::OPEN_READWRITE);
    std::vector<std::string> tables{"part", "lot", "reading"};
    if (all) tables.insert(tables.end(), {"history", "counter", "sqlite_sequence"});
    std::string out;
    for (const std::string& table : tables) {
        SQLite::Statement rows(database, "SELECT * FROM " + table + " ORDER BY 1");
        while (rows.executeStep()) {
            out += table;
            for (int k = 0; k < rows.getColumnCount(); ++k) out += "|" + (rows.isColumnNull(k) ? std::string("NULL") : rows.getColumn(k).getString());
            out += '\n';
        }
    }
    return out;
}

using rc::gen::element;
using rc::gen::inRange;

std::string some_text() { return *element<std::string>("", "Shed / tin", "µ Ω °C", "it's \"quoted\"", "a\nb", "'; DROP TABLE lot; --", "0918"); }

PartRecord some_type(int serial) {
    PartRecord record;
    record.part.family = *element(Family::switch_, Family::rectifier, Family::capacitor);
    record.part.name = "type " + std::to_string(serial) + *element<std::string>("", " µ", " 'x'");
    record.part.attributes["technology"] = some_text();
    const Symbol symbol = record.part.family == Family::switch_ ? Symbol::R_DSon : record.part.family == Family::rectifier ? Symbol::I_R : Symbol::ESR;
    Figure figure;
    figure.symbol = symbol;
    figure.known = *element(Known::kind, Known::datasheet, Known::told);
    const double value = *inRange(1, 1000) * 1e-4 / 3;  // no decimal fraction: the last bit must survive
    figure.value = {value, value * 1.5, value * 2};
    if (*rc::gen::arbitrary<bool>()) figure.at.temperature = 373.15;
    record.part.figures.push_back(figure);
    record.starter = *rc::gen::arbitrary<bool>();
    return record;
}

LotRecord some_lot(std::int64_t part_id) {
    LotRecord lot;
    lot.part_id = part_id;
    lot.count = *inRange(0, 50);
    lot.place = some_text();
    lot.origin = *element(Origin::new_, Origin::surplus, Origin::pulled);
    lot.date_code = some_text();
    lot.donor = some_text();
    lot.note = some_text();
    return lot;
}

ReadingRecord some_reading(std::int64_t lot_id, Symbol symbol) {
    ReadingRecord reading;
    reading.lot_id = lot_id;
    reading.figure.symbol = symbol;
    reading.figure.known = Known::measured;
    const double value = *inRange(1, 1000) * 1e-3 / 7;
    reading.figure.value = {value, value, value};
    reading.figure.date = "2026-01-18";
    reading.figure.method = some_text();
    reading.set_aside = *rc::gen::arbitrary<bool>();
    return reading;
}

template <class Record>
const Record& any_of(const std::vector<Record>& records) {
    return records[static_cast<std::size_t>(*inRange(0, static_cast<int>(records.size())))];
}

/// An edit of one to three changes that may or may not fit the bin.
Edit some_edit(const Store& store, int& serial) {
    Edit edit{"edit " + std::to_string(++serial), {}};
    const auto parts = store.parts();
    const auto lots = store.lots();
    std::vector<ReadingRecord> readings;
    for (const LotRecord& lot : lots)
        for (const ReadingRecord& reading : store.readings(lot.id)) readings.push_back(reading);
    const int changes = *inRange(1, 4);
    for (int k = 0; k < changes; ++k) {
        const int kind = *inRange(0, 10);
        if (kind == 0 || parts.empty()) {
            edit.changes.emplace_back(Change<PartRecord>{{}, some_type(*inRange(0, 2) == 0 ? *inRange(0, 4) : ++serial + 100)});
        } else if (kind == 1) {
            const PartRecord before = any_of(parts);
            PartRecord after = some_type(++serial + 100);
            after.part.family = before.part.family;
            after.part.figures = before.part.figures;
            edit.changes.emplace_back(Change<PartRecord>{before, after});
        } else if (kind == 2) {
            edit.changes.emplace_back(Change<PartRecord>{any_of(parts), {}});
        } else if (kind <= 4 || lots.empty()) {
            edit.changes.emplace_back(Change<LotRecord>{{}, some_lot(any_of(parts).id)});
        } else if (kind == 5) {
            const LotRecord before = any_of(lots);
            LotRecord after = some_lot(before.part_id);
            after.number = before.number;
            edit.changes.emplace_back(Change<LotRecord>{before, after});
        } else if (kind == 6) {
            edit.changes.emplace_back(Change<LotRecord>{any_of(lots), {}});
        } else if (kind <= 8 || readings.empty()) {
            edit.changes.emplace_back(Change<ReadingRecord>{{}, some_reading(any_of(lots).id, *element(Symbol::ESR, Symbol::R_DSon, Symbol::I_R))});
        } else {
            const ReadingRecord before = any_of(readings);
            ReadingRecord after = before;
            after.set_aside = !before.set_aside;
            if (*rc::gen::arbitrary<bool>()) edit.changes.emplace_back(Change<ReadingRecord>{before, after});
            else edit.changes.emplace_back(Change<ReadingRecord>{before, {}});
        }
    }
    return edit;
}

}  // namespace

TEST_CASE("any sequence of edits with undo and redo and reopening goes through the same states", "[catalog][property]") {
    rc::prop("the bin is always the state that its history says, row for row", [] {
        const TempFolder folder;
        const std::string path = folder.file("a.binwright");
        auto store = std::make_unique<Store>(path);
        std::vector<std::string> states{content(path, false)};  // states[k]: after k edits that stand
        std::size_t now = 0;
        int serial = 0, applied = 0;
        const int steps = *inRange(1, 40);
        for (int step = 0; step < steps; ++step) {
            const int what = *inRange(0, 8);
            if (what <= 4) {
                const Edit edit = some_edit(*store, serial);
                const std::string before = content(path, true);
                bool done = true;
                try {
                    (void)store->apply(edit);
                } catch (const EditRefused&) {
                    done = false;
                    RC_ASSERT(content(path, true) == before);  // nothing at all has changed, counters and history included
                }
                if (done) {
                    states.resize(++now);
                    states.push_back(content(path, false));
                    ++applied;
                }
            } else if (what == 5) {
                RC_ASSERT(store->undo().has_value() == (now > 0));
                if (now > 0) --now;
            } else if (what == 6) {
                const bool more = now + 1 < states.size();
                RC_ASSERT(store->redo().has_value() == more);
                if (more) ++now;
            } else {
                store.reset();
                store = std::make_unique<Store>(path, Store::Open::existing);
            }
            RC_ASSERT(content(path, false) == states[now]);
        }
        RC_ASSERT(store->history(1000).size() == static_cast<std::size_t>(applied));
        store.reset();
        Store again(path, Store::Open::existing);
        while (now + 1 < states.size()) {
            RC_ASSERT(again.redo().has_value());
            RC_ASSERT(content(path, false) == states[++now]);
        }
        while (now > 0) {
            RC_ASSERT(again.undo().has_value());
            RC_ASSERT(content(path, false) == states[--now]);
        }
        RC_ASSERT(!again.undo().has_value());
    });
}

TEST_CASE("redo makes the newest branch again and never an older one", "[catalog][store]") {
    Store store(":memory:");
    const auto add = [&](const std::string& name) {
        PartRecord type;
        type.part.family = Family::capacitor;
        type.part.name = name;
        store.apply({"add " + name, {Change<PartRecord>{{}, type}}});
    };
    add("kept");
    add("given up");
    store.undo();
    add("instead");
    store.undo();
    CHECK(store.redo()->what == "add instead");
    CHECK_FALSE(store.redo().has_value());
    store.undo();
    store.undo();
    CHECK(store.redo()->what == "add kept");
    CHECK(store.redo()->what == "add instead");
    CHECK_FALSE(store.redo().has_value());
    CHECK(store.history().size() == 3);
}

TEST_CASE("a bin of the second schema still knows what may be redone", "[catalog][migration]") {
    const TempFolder folder;
    const std::string path = folder.file("second.binwright");
    std::ifstream in(std::string(BINWRIGHT_SOURCE) + "/tests/catalog/schema-2.sql");
    std::ostringstream text;
    text << in.rdbuf();
    SQLite::Database(path, SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE).exec(text.str());
    Store store(path, Store::Open::existing);
    CHECK(store.history().size() == 4);
    CHECK(store.parts().size() == 1);
    CHECK(store.redo()->what == "add 3 of Aluminium 25 V 470 µF");
    CHECK(store.lots().front().place == "Shed / tin");
    CHECK_FALSE(store.redo().has_value());
    store.undo();
    CHECK(store.undo()->what == "add Aluminium 25 V 470 µF");
    CHECK(store.parts().empty());
}

TEST_CASE("applying the inverse of an edit restores every row and the inverse of that repeats it", "[catalog][property]") {
    rc::prop("apply(apply(edit)) restores", [] {
        const TempFolder folder;
        const std::string path = folder.file("a.binwright");
        Store store(path);
        int serial = 0;
        for (int k = 0; k < 6; ++k) {
            const std::string before = content(path, false);
            Edit back;
            try {
                back = store.apply(some_edit(store, serial));
            } catch (const EditRefused&) {
                continue;
            }
            const std::string after = content(path, false);
            const Edit forth = store.apply(back);
            RC_ASSERT(content(path, false) == before);
            (void)store.apply(forth);
            RC_ASSERT(content(path, false) == after);
        }
    });
}

TEST_CASE("an edit that fails in its last change leaves the bin as it was", "[catalog][store]") {
    const TempFolder folder;
    const std::string path = folder.file("a.binwright");
    Store store(path);
    PartRecord type;
    type.part.family = Family::capacitor;
    type.part.name = "Film";
    type.part.figures = {parse_figure(Symbol::ESR, "5 mΩ @ 100 kHz", Known::datasheet)};
    LotRecord lot;
    lot.part_id = -1;
    store.apply({"add both", {Change<PartRecord>{{}, type}, Change<LotRecord>{{}, lot}}});
    type = store.parts().front();
    lot = store.lots().front();
    const std::string before = content(path, true);
    const auto refused = [&](const std::variant<Change<PartRecord>, Change<LotRecord>, Change<ReadingRecord>>& last) {
        LotRecord first = lot;
        first.count = 7;
        PartRecord other = type;
        other.id = 0;
        other.part.name = "another";
        std::string why = "nothing";
        try {
            store.apply({"fails", {Change<LotRecord>{lot, first}, Change<PartRecord>{{}, other}, last}});
        } catch (const std::exception& error) {
            why = error.what();
        }
        CHECK(content(path, true) == before);
        return why;
    };
    PartRecord renamed = type;
    renamed.id = 0;
    renamed.part.name = "FILM";
    CHECK(refused(Change<PartRecord>{{}, renamed}) == "the bin has this name or number already");
    renamed.part.name.clear();
    CHECK(refused(Change<PartRecord>{{}, renamed}) == "a value lies outside what the bin can hold");
    CHECK(refused(Change<PartRecord>{type, {}}) == "it is still in use: something in the bin refers to it");
    LotRecord next = lot;
    next.id = 0;
    CHECK(refused(Change<LotRecord>{{}, next}) == "the bin has this name or number already");
    next.number = 0;
    next.count = -1;
    CHECK(refused(Change<LotRecord>{{}, next}) == "a lot cannot hold -1 pieces");
    next.count = 1;
    next.part_id = 99;
    CHECK(refused(Change<LotRecord>{{}, next}) == "the bin has no part type 99 for this lot");
    next.part_id = -9;
    CHECK(refused(Change<LotRecord>{{}, next}) == "an edit refers to a later change of itself");
    CHECK(refused(Change<LotRecord>{}) == "an edit changes nothing");
    ReadingRecord reading;
    reading.lot_id = lot.id;
    reading.figure = parse_figure(Symbol::V_F, "0.5 V", Known::measured);
    CHECK(refused(Change<ReadingRecord>{{}, reading}) == "V_F is no figure of a capacitor");
    // What is no number cannot be written down, and must not be written as something else.
    reading.figure = parse_figure(Symbol::ESR, "5 mΩ", Known::measured);
    for (const double bad : {std::nan(""), std::numeric_limits<double>::infinity()}) {
        reading.figure.value.worst = bad;
        CHECK(refused(Change<ReadingRecord>{{}, reading}) == "the ESR of this edit is not a number");
    }
    PartRecord nameless = type;
    nameless.part.name = "bad \xB5";
    CHECK(refused(Change<PartRecord>{type, nameless}) == "a text of this edit is not UTF-8");
}

TEST_CASE("a type keeps its family while its lots have readings", "[catalog][store]") {
    // Otherwise a reading of ESR would stand at a switch, and nothing could read the bin any more.
    Store store(":memory:");
    PartRecord type;
    type.part.family = Family::capacitor;
    type.part.name = "Film";
    LotRecord lot;
    lot.part_id = -1;
    ReadingRecord reading;
    reading.lot_id = -2;
    reading.figure = parse_figure(Symbol::ESR, "5 mΩ @ 100 kHz", Known::measured);
    store.apply({"add", {Change<PartRecord>{{}, type}, Change<LotRecord>{{}, lot}, Change<ReadingRecord>{{}, reading}}});
    type = store.parts().front();
    PartRecord other = type;
    other.part.family = Family::switch_;
    CHECK_THROWS_WITH(store.apply({"make it a switch", {Change<PartRecord>{type, other}}}), "readings of its lots say that this type is a capacitor");
    CHECK(store.readings(store.lots().front().id).size() == 1);
    // Nor does the lot go over to a type of another family.
    other.id = 0;
    other.part.name = "Switch";
    store.apply({"add a switch", {Change<PartRecord>{{}, other}}});
    lot = store.lots().front();
    LotRecord moved = lot;
    moved.part_id = store.part_named("Switch")->id;
    CHECK_THROWS_WITH(store.apply({"it is a switch", {Change<LotRecord>{lot, moved}}}), "readings of this lot say that it is of a capacitor type");
    CHECK(store.readings(lot.id).size() == 1);
    // Without readings both may change.
    store.apply({"forget", {Change<ReadingRecord>{store.readings(lot.id).front(), {}}}});
    store.apply({"it is a switch", {Change<LotRecord>{lot, moved}}});
    CHECK(store.engine_lots(Family::switch_).size() == 1);
}

TEST_CASE("two programs that write the same bin at once lose nothing and give no number twice", "[catalog][store]") {
    const TempFolder folder;
    const std::string path = folder.file("a.binwright");
    std::int64_t type_id = 0;
    {
        Store store(path);
        PartRecord type;
        type.part.family = Family::capacitor;
        type.part.name = "Film";
        store.apply({"add a type", {Change<PartRecord>{{}, type}}});
        type_id = store.parts().front().id;
    }
    constexpr int kEach = 40, kPrograms = 3;
    std::vector<pid_t> children;
    for (int program = 0; program < kPrograms; ++program) {
        const pid_t child = fork();
        REQUIRE(child >= 0);
        if (child == 0) {
            int status = 0;
            try {
                Store store(path, Store::Open::existing);
                for (int k = 0; k < kEach; ++k) {
                    LotRecord lot;
                    lot.part_id = type_id;
                    lot.note = std::to_string(program) + "/" + std::to_string(k);
                    store.apply({"add a lot", {Change<LotRecord>{{}, lot}}});
                }
            } catch (const std::exception&) {
                status = 1;
            }
            _exit(status);
        }
        children.push_back(child);
    }
    // Meanwhile somebody reads: always whole edits, never fewer lots than before.
    std::size_t most = 0;
    bool shrank = false;
    for (int k = 0; k < 50; ++k) {
        const Store reader(path, Store::Open::read_only);
        const std::size_t count = reader.lots().size();
        shrank |= count < most;
        most = std::max(most, count);
    }
    CHECK_FALSE(shrank);
    for (const pid_t child : children) {
        int status = -1;
        REQUIRE(waitpid(child, &status, 0) == child);
        CHECK((WIFEXITED(status) && WEXITSTATUS(status) == 0));
    }
    Store store(path, Store::Open::existing);
    std::set<std::int64_t> numbers;
    std::set<std::string> notes;
    for (const LotRecord& lot : store.lots()) numbers.insert(lot.number), notes.insert(lot.note);
    CHECK(numbers.size() == kEach * kPrograms);
    CHECK(notes.size() == kEach * kPrograms);
    CHECK(store.history(1000).size() == kEach * kPrograms + 1);
    for (int k = 0; k < kEach * kPrograms; ++k) REQUIRE(store.undo().has_value());
    CHECK(store.lots().empty());
}

TEST_CASE("programs that make or bring up the same bin at once all come to use it", "[catalog][store]") {
    for (const bool older : {false, true}) {
        const TempFolder folder;
        const std::string path = folder.file("a.binwright");
        if (older) {
            std::ifstream in(std::string(BINWRIGHT_SOURCE) + "/tests/catalog/schema-1.sql");
            std::ostringstream text;
            text << in.rdbuf();
            SQLite::Database(path, SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE).exec(text.str());
        }
        std::vector<pid_t> children;
        for (int program = 0; program < 6; ++program) {
            const pid_t child = fork();
            REQUIRE(child >= 0);
            if (child == 0) {
                int status = 0;
                try {
                    Store store(path);
                    PartRecord type;
                    type.part.family = Family::capacitor;
                    type.part.name = "type " + std::to_string(program);
                    store.apply({"add", {Change<PartRecord>{{}, type}}});
                } catch (const std::exception& error) {
                    std::fprintf(stderr, "%s\n", error.what());
                    status = 1;
                }
                _exit(status);
            }
            children.push_back(child);
        }
        for (const pid_t child : children) {
            int status = -1;
            REQUIRE(waitpid(child, &status, 0) == child);
            CHECK((WIFEXITED(status) && WEXITSTATUS(status) == 0));
        }
        CHECK(Store(path, Store::Open::existing).parts().size() == (older ? 7 : 6));
        if (!older) continue;
        SQLite::Database kept(path + ".before-schema-2", SQLite::OPEN_READWRITE);
        CHECK(kept.execAndGet("PRAGMA user_version").getInt() == 1);
        CHECK(kept.execAndGet("SELECT count(*) FROM part").getInt() == 1);
    }
}

TEST_CASE("what another program changed meanwhile is not overwritten unseen", "[catalog][store]") {
    const TempFolder folder;
    const std::string path = folder.file("a.binwright");
    Store here(path);
    PartRecord type;
    type.part.family = Family::capacitor;
    type.part.name = "Film";
    LotRecord lot;
    lot.part_id = -1;
    lot.count = 5;
    here.apply({"add", {Change<PartRecord>{{}, type}, Change<LotRecord>{{}, lot}}});
    Store there(path, Store::Open::existing);
    const LotRecord seen = there.lots().front();
    const std::int64_t revision = there.revision();
    here.apply(take_edit(here, seen, 2));
    CHECK(there.revision() != revision);  // it can tell that it must look again
    CHECK_THROWS_WITH(there.apply(Edit{"rename", {Change<LotRecord>{seen, [&] { LotRecord after = seen; after.note = "mine"; return after; }()}}}),
                      "the bin has changed meanwhile: what was to be changed is no longer as it was seen");
    CHECK(there.lots().front().count == 3);
    // Undo takes back the newest change of the bin, whoever made it.
    CHECK(there.undo()->what.find("take 2") == 0);
    CHECK(here.lots().front().count == 5);
}

TEST_CASE("a bin that another program holds is not written and says so", "[catalog][store]") {
    const TempFolder folder;
    const std::string path = folder.file("a.binwright");
    Store store(path);
    const std::string before = content(path, true);
    SQLite::Database other(path, SQLite::OPEN_READWRITE);
    other.exec("BEGIN IMMEDIATE");
    PartRecord type;
    type.part.family = Family::capacitor;
    type.part.name = "Film";
    CHECK_THROWS_WITH(store.apply({"add", {Change<PartRecord>{{}, type}}}), path + " is in use by another program; nothing was changed");
    other.exec("ROLLBACK");
    CHECK(content(path, true) == before);
    store.apply({"add", {Change<PartRecord>{{}, type}}});
    CHECK(store.parts().size() == 1);
}
