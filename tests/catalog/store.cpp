// SPDX-License-Identifier: GPL-3.0-or-later
#include "catalog/store.hpp"

#include <SQLiteCpp/SQLiteCpp.h>
#include <rapidcheck/catch.h>
#include <unistd.h>

#include <catch2/catch.hpp>
#include <filesystem>
#include <fstream>
#include <sstream>

#include "catalog/schema.hpp"

using namespace binwright;

namespace {

struct TempFolder {
    std::filesystem::path path;
    TempFolder() {
        std::string pattern = (std::filesystem::temp_directory_path() / "bin-test-XXXXXX").string();
        path = mkdtemp(pattern.data());
    }
    ~TempFolder() { std::filesystem::remove_all(path); }
    [[nodiscard]] std::string file(const std::string& name) const { return (path / name).string(); }
};

PartRecord capacitor_type(const std::string& name, const std::string& esr = "20 .. 30 .. 45 mΩ @ 100 kHz, 20 °C") {
    PartRecord record;
    record.part.family = Family::capacitor;
    record.part.name = name;
    record.part.attributes = {{"technology", "aluminium"}, {"can", "10x20 mm"}};
    record.part.figures = {parse_figure(Symbol::C, "470 µF", Known::marked), parse_figure(Symbol::U_R, "25 V", Known::marked),
                           parse_figure(Symbol::ESR, esr, Known::kind)};
    return record;
}

std::int64_t added_id(const Edit& inverse) { return std::get<Change<PartRecord>>(inverse.changes.front()).before->id; }

/// A bin with one type and one lot of it.
struct Bin {
    Store store{":memory:"};
    PartRecord type;
    LotRecord lot;
    Bin() {
        type = capacitor_type("Aluminium 25 V 470 µF");
        type.id = added_id(store.apply({"add a type", {Change<PartRecord>{{}, type}}}));
        LotRecord fresh;
        fresh.part_id = type.id;
        fresh.count = 5;
        fresh.place = "Shed / grey cabinet / A3";
        fresh.origin = Origin::pulled;
        const Edit back = store.apply({"add a lot", {Change<LotRecord>{{}, fresh}}});
        lot = *std::get<Change<LotRecord>>(back.changes.front()).before;
    }
};

struct Everything {
    std::vector<PartRecord> parts;
    std::vector<LotRecord> lots;
    std::vector<ReadingRecord> readings;
    friend bool operator==(const Everything&, const Everything&) = default;
};

Everything everything(const Store& store) {
    Everything all{store.parts(), store.lots(), {}};
    for (const LotRecord& lot : all.lots)
        for (const ReadingRecord& reading : store.readings(lot.id)) all.readings.push_back(reading);
    return all;
}

std::string slurp(const std::string& path) {
    std::ifstream in(path, std::ios::binary);
    std::ostringstream text;
    text << in.rdbuf();
    return text.str();
}

}  // namespace

TEST_CASE("the inverse of an edit restores the bin to the record", "[catalog][store]") {
    Bin bin;
    const Everything before = everything(bin.store);
    const Edit back = bin.store.apply(take_edit(bin.store, bin.lot, 2));
    CHECK(bin.store.lot(bin.lot.id)->count == 3);
    bin.store.apply(back);
    CHECK(everything(bin.store) == before);
}

TEST_CASE("undoing everything step by step passes through every earlier state", "[catalog][store][property]") {
    rc::prop("undo restores exactly and redo repeats exactly", [] {
        Bin bin;
        std::vector<Everything> states{everything(bin.store)};
        const int steps = *rc::gen::inRange(1, 12);
        for (int step = 0; step < steps; ++step) {
            const auto lots = bin.store.lots();
            Edit edit;
            const int kind = *rc::gen::inRange(0, 6);
            if (kind == 0) {
                edit = {"add a type", {Change<PartRecord>{{}, capacitor_type("type " + std::to_string(step))}}};
            } else if (kind == 1) {
                LotRecord lot;
                lot.part_id = bin.type.id;
                lot.count = *rc::gen::inRange(0, 9);
                lot.note = *rc::gen::element<std::string>("", "dusty", "µ Ω °C");
                edit = {"add a lot", {Change<LotRecord>{{}, lot}}};
            } else if (kind == 2 && !lots.empty()) {
                ReadingRecord reading;
                reading.lot_id = lots.front().id;
                reading.figure = parse_figure(Symbol::ESR, "33 mΩ @ 100 kHz, 20 °C", Known::measured);
                reading.figure.date = "2026-01-02";
                edit = {"measure", {Change<ReadingRecord>{{}, reading}}};
            } else if (kind == 3 && !lots.empty() && lots.back().count > 0) {
                edit = take_edit(bin.store, lots.back(), 1);
            } else if (kind == 4 && !lots.empty() && bin.store.readings(lots.back().id).empty()) {
                edit = {"remove a lot", {Change<LotRecord>{lots.back(), {}}}};
            } else {
                // A type and a lot of it in one step: the lot names the type by its place in the edit.
                LotRecord lot;
                lot.part_id = -1;
                edit = {"add both", {Change<PartRecord>{{}, capacitor_type("both " + std::to_string(step))}, Change<LotRecord>{{}, lot}}};
            }
            bin.store.apply(edit);
            states.push_back(everything(bin.store));
        }
        for (std::size_t k = states.size() - 1; k-- > 0;) {
            RC_ASSERT(bin.store.undo().has_value());
            RC_ASSERT(everything(bin.store) == states[k]);
        }
        for (std::size_t k = 1; k < states.size(); ++k) {
            RC_ASSERT(bin.store.redo().has_value());
            RC_ASSERT(everything(bin.store) == states[k]);
        }
    });
}

TEST_CASE("an edit that does not fit changes nothing and says why", "[catalog][store]") {
    Bin bin;
    const Everything before = everything(bin.store);
    LotRecord stale = bin.lot;
    stale.count = 99;
    LotRecord after = stale;
    after.count = 1;
    CHECK_THROWS_WITH(bin.store.apply({"stale", {Change<LotRecord>{stale, after}}}),
                      "the bin has changed meanwhile: what was to be changed is no longer as it was seen");
    CHECK_THROWS_WITH(bin.store.apply({"again", {Change<PartRecord>{{}, capacitor_type("aluminium 25 v 470 µF")}}}),
                      "the bin has this name or number already");
    CHECK_THROWS_WITH(bin.store.apply({"in use", {Change<PartRecord>{bin.type, {}}}}), "it is still in use: something in the bin refers to it");
    CHECK_THROWS_WITH(take_edit(bin.store, bin.lot, 6), lot_label(bin.lot.number) + " holds 5 pieces; 6 cannot be taken");
    // The first change of an edit is taken back when the second is refused.
    LotRecord fewer = bin.lot;
    fewer.count = 4;
    CHECK_THROWS_AS(bin.store.apply({"half", {Change<LotRecord>{bin.lot, fewer}, Change<PartRecord>{bin.type, {}}}}), EditRefused);
    CHECK(everything(bin.store) == before);
    CHECK(bin.store.history().size() == 2);
}

TEST_CASE("ids and numbers are never given twice", "[catalog][store]") {
    Bin bin;
    LotRecord lot;
    lot.part_id = bin.type.id;
    bin.store.apply({"add", {Change<LotRecord>{{}, lot}}});
    const LotRecord gone = bin.store.lots().back();
    bin.store.undo();
    bin.store.apply({"add another", {Change<LotRecord>{{}, lot}}});
    const LotRecord next = bin.store.lots().back();
    CHECK(next.id != gone.id);
    CHECK(next.number != gone.number);
}

TEST_CASE("history lives in the file and undo works from another program", "[catalog][store]") {
    const TempFolder folder;
    const std::string path = folder.file("a.binwright");
    {
        Store store(path);
        store.apply({"add a type", {Change<PartRecord>{{}, capacitor_type("one")}}});
        store.apply({"add another", {Change<PartRecord>{{}, capacitor_type("two")}}});
    }
    Store store(path, Store::Open::existing);
    REQUIRE(store.history().size() == 2);
    CHECK(store.history().front().what == "add another");
    CHECK(store.undo()->what == "add another");
    CHECK(store.parts().size() == 1);
    CHECK(store.history().front().undone);
    CHECK(store.redo()->what == "add another");
    CHECK(store.parts().size() == 2);
    CHECK_FALSE(store.redo().has_value());
}

TEST_CASE("what was undone cannot be redone on top of something new", "[catalog][store]") {
    Bin bin;
    bin.store.apply(take_edit(bin.store, bin.lot, 1));
    bin.store.undo();
    bin.store.apply(take_edit(bin.store, bin.lot, 3));
    CHECK_FALSE(bin.store.redo().has_value());
}

TEST_CASE("one wrong digit or two swapped neighbours change the check letter", "[catalog][label]") {
    for (std::int64_t number = 1; number < 20000; ++number) {
        const std::string digits = std::to_string(number);
        const char letter = lot_label(number).back();
        for (std::size_t k = 0; k < digits.size(); ++k) {
            for (char wrong = '0'; wrong <= '9'; ++wrong) {
                std::string other = digits;
                other[k] = wrong;
                if (other == digits || other.front() == '0') continue;
                REQUIRE(lot_label(std::stoll(other)).back() != letter);
            }
            if (k + 1 < digits.size() && digits[k] != digits[k + 1]) {
                std::string other = digits;
                std::swap(other[k], other[k + 1]);
                if (other.front() != '0') REQUIRE(lot_label(std::stoll(other)).back() != letter);
            }
        }
    }
}

TEST_CASE("a label is found with or without its letter and refused with a wrong one", "[catalog][label]") {
    Bin bin;
    const std::string label = lot_label(bin.lot.number);
    CHECK(bin.store.lot_labelled(label)->id == bin.lot.id);
    CHECK(bin.store.lot_labelled(std::to_string(bin.lot.number))->id == bin.lot.id);
    std::string wrong = label;
    wrong.back() = wrong.back() == 'Z' ? 'A' : 'Z';
    CHECK_THROWS_WITH(bin.store.lot_labelled(wrong), "the check letter of " + wrong + " does not fit its number (" + std::to_string(bin.lot.number) +
                                                         " goes with " + label.back() + "): read the label again");
    CHECK_FALSE(bin.store.lot_labelled("Aluminium 25 V 470 µF").has_value());
    CHECK(bin.store.engine_lot("aluminium 25 v 470 µF")->part.name == "Aluminium 25 V 470 µF");
}

TEST_CASE("the worst reading that is not set aside counts and replaces the estimate", "[catalog][merge]") {
    Bin bin;
    const auto reading = [&](const char* text, bool aside) {
        ReadingRecord record;
        record.lot_id = bin.lot.id;
        record.figure = parse_figure(Symbol::ESR, text, Known::measured);
        record.set_aside = aside;
        return record;
    };
    const Lot lot = as_lot(bin.type, bin.lot, {reading("28 mΩ @ 100 kHz, 20 °C", false), reading("34 mΩ @ 100 kHz, 20 °C", false), reading("90 mΩ @ 100 kHz, 20 °C", true)});
    int found = 0;
    for (const Figure& figure : lot.part.figures)
        if (figure.symbol == Symbol::ESR) {
            ++found;
            CHECK(figure.value.worst == 0.034);
            CHECK(figure.known == Known::measured);
        }
    CHECK(found == 1);
}

TEST_CASE("a measured breakdown never lifts the rating and a reading beyond the limit makes the lot suspect", "[catalog][merge]") {
    PartRecord type;
    type.part.family = Family::switch_;
    type.part.name = "N-MOSFET 60 V";
    type.part.figures = {parse_figure(Symbol::V_DSS, "60 V", Known::marked), parse_figure(Symbol::R_DSon, "17.5 mΩ max @ 10 V", Known::datasheet)};
    LotRecord lot;
    lot.number = 7;
    ReadingRecord breakdown;
    breakdown.figure = parse_figure(Symbol::V_DSS, "68 V", Known::measured);
    const Lot better = as_lot(type, lot, {breakdown});
    for (const Figure& figure : better.part.figures)
        if (figure.symbol == Symbol::V_DSS) CHECK(figure.value.worst == 60);
    CHECK_FALSE(better.suspect);
    ReadingRecord weak;
    weak.figure = parse_figure(Symbol::R_DSon, "22 mΩ @ 10 V", Known::measured);
    const Lot suspect = as_lot(type, lot, {weak});
    CHECK(suspect.suspect);
    CHECK(suspect.suspect_why == "R_DS(on) measured 22 mΩ, and the type's limit is 17.5 mΩ");
}

TEST_CASE("lots are found by words and by comparisons", "[catalog][find]") {
    Bin bin;
    CHECK(bin.store.find("grey aluminium").size() == 1);
    CHECK(bin.store.find("U_R>=25V origin:pulled").size() == 1);
    CHECK(bin.store.find("U_R>=35V").empty());
    CHECK(bin.store.find("Ur=25V place:cabinet family:capacitor").size() == 1);
    CHECK(bin.store.find("V_DSS>=10V").empty());
    CHECK_THROWS_AS(bin.store.find("U_R>=25A"), InputError);
}

TEST_CASE("a file that is no bin is refused and left as it is", "[catalog][store]") {
    const TempFolder folder;
    const std::string path = folder.file("note.txt");
    std::ofstream(path) << "This is a shopping list, long enough not to be taken for an empty file by anything that reads it.\n";
    const std::string before = slurp(path);
    CHECK_THROWS_WITH(Store(path), path + " is not a bin; it was left as it is");
    CHECK(slurp(path) == before);

    const std::string other = folder.file("other.db");
    {
        SQLite::Database database(other, SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE);
        database.exec("CREATE TABLE recipes (name TEXT)");
    }
    const std::string recipes = slurp(other);
    CHECK_THROWS_WITH(Store(other), other + " is a database, but not a bin; it was left as it is");
    CHECK(slurp(other) == recipes);

    const std::string newer = folder.file("newer.binwright");
    { Store store(newer); }
    {
        SQLite::Database database(newer, SQLite::OPEN_READWRITE);
        database.exec("PRAGMA user_version = 99");
    }
    CHECK_THROWS_WITH(Store(newer), newer + " was written by a newer version of this program (schema 99, this one knows " +
                                        std::to_string(kSchemaVersion) + "); it was left as it is");
}

TEST_CASE("opening for reading never makes a bin", "[catalog][store]") {
    const TempFolder folder;
    const std::string path = folder.file("none.binwright");
    CHECK_THROWS_WITH(Store(path, Store::Open::read_only), "there is no bin at " + path);
    CHECK_THROWS_WITH(Store(path, Store::Open::existing), "there is no bin at " + path);
    CHECK_FALSE(std::filesystem::exists(path));
}

TEST_CASE("a bin of the first schema still opens with all it holds", "[catalog][migration]") {
    const TempFolder folder;
    const std::string path = folder.file("first.binwright");
    {
        SQLite::Database database(path, SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE);
        database.exec(slurp(std::string(BINWRIGHT_SOURCE) + "/tests/catalog/schema-1.sql"));
    }
    Store store(path, Store::Open::existing);
    REQUIRE(store.lots().size() == 1);
    CHECK(store.lots().front().place == "Shed / tin");
    CHECK(store.engine_lots().front().part.name == "Aluminium 25 V 470 µF");
    CHECK(store.readings(store.lots().front().id).size() == 1);
    CHECK(store.undo()->what == "measure 1-B");
    CHECK(store.readings(store.lots().front().id).empty());
}

TEST_CASE("a reading under quite other conditions does not stand for the type's figures", "[catalog][lots]") {
    // A multimeter's diode test says nothing of the drop at 10 A, nor a bench supply of 5 V of the leakage at 45 V and 100 °C.
    PartRecord type;
    type.part.family = Family::rectifier;
    type.part.name = "Schottky";
    type.part.figures = {parse_figure(Symbol::V_F, "0.45 .. 0.5 .. 0.6 V @ 10 A, 25 °C", Known::kind), parse_figure(Symbol::I_R, "5 .. 9 .. 18 mA @ 45 V, 100 °C", Known::kind)};
    LotRecord lot;
    lot.number = 136;
    const auto reading = [](Symbol symbol, const char* text) {
        ReadingRecord one;
        one.figure = parse_figure(symbol, text, Known::measured);
        return one;
    };
    const Lot far = as_lot(type, lot, {reading(Symbol::V_F, "0.18 V @ 1 mA, 25 °C"), reading(Symbol::I_R, "1 µA @ 5 V, 25 °C")});
    CHECK(far.part.figures == type.part.figures);
    REQUIRE(far.uncounted.size() == 2);
    CHECK(far.uncounted[1].second == "I_R measured as 1 µA @ 5 V, 25 °C: too far from the conditions of its type's figures to count");
    const Lot near = as_lot(type, lot, {reading(Symbol::I_R, "7 mA @ 40 V, 95 °C")});
    CHECK(near.uncounted.empty());
    REQUIRE(near.part.figures.size() == 2);
    CHECK(near.part.figures.front().known == Known::measured);
}
