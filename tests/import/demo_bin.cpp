// SPDX-License-Identifier: GPL-3.0-or-later
// The tide-gauge station's bin: its lots and readings agree with the types they name.
#include <catch2/catch.hpp>

#include <cmath>
#include <fstream>
#include <map>
#include <regex>
#include <set>
#include <sstream>

#include "import/delimited.hpp"
#include "import/starter.hpp"
#include "tests/import/import_support.hpp"

using namespace binwright;

namespace {

struct Demo {
    Store store{":memory:"};
    std::map<std::int64_t, PartRecord> types;
    Demo() {
        store.apply(demo_edit(store));
        for (const PartRecord& part : store.parts()) types.emplace(part.id, part);
    }
};

std::string text_of(const std::string& path) {
    std::ifstream in(std::string(BINWRIGHT_SOURCE) + "/" + path, std::ios::binary);
    std::ostringstream out;
    out << in.rdbuf();
    return out.str();
}

/// The labels "101-K" that a text speaks of.
std::set<std::string> labels_in(const std::string& text) {
    std::set<std::string> found;
    const std::regex label("\\b([0-9]{3})-([A-Z])\\b");
    for (std::sregex_iterator each(text.begin(), text.end(), label), end; each != end; ++each) found.insert(each->str());
    return found;
}

}  // namespace

TEST_CASE("every lot of the demo bin is of a type that the bin holds and has a number of its own", "[import][demo]") {
    const Demo demo;
    const auto lots = demo.store.lots();
    CHECK(lots.size() >= 40);
    std::set<std::int64_t> numbers;
    int pulled = 0, fresh = 0;
    for (const LotRecord& lot : lots) {
        CAPTURE(lot.number);
        CHECK(numbers.insert(lot.number).second);
        CHECK(demo.types.count(lot.part_id) == 1);
        CHECK(lot.count >= 1);
        CHECK(!lot.place.empty());
        (lot.origin == Origin::pulled ? pulled : fresh)++;
        if (lot.origin != Origin::pulled) CHECK(lot.donor.empty());
        // A date code is year and week (IEC 60062, clause 5, in its four-digit form).
        if (!lot.date_code.empty()) {
            REQUIRE(lot.date_code.size() == 4);
            const int week = std::stoi(lot.date_code.substr(2));
            CHECK((week >= 1 && week <= 53));
        }
    }
    CHECK(pulled >= 15);
    CHECK(fresh >= 15);
}

TEST_CASE("every reading of the demo bin is a possible one of its part and has a day and a method", "[import][demo]") {
    const Demo demo;
    int count = 0;
    for (const LotRecord& lot : demo.store.lots()) {
        const Part& part = demo.types.at(lot.part_id).part;
        for (const ReadingRecord& reading : demo.store.readings(lot.id)) {
            ++count;
            CAPTURE(lot.number, format_figure(reading.figure));
            CHECK(reading.figure.known == Known::measured);
            CHECK_FALSE(reading.set_aside);
            CHECK(implausible(part, reading.figure).empty());
            CHECK(std::regex_match(reading.figure.date, std::regex("20[0-9]{2}-[01][0-9]-[0-3][0-9]")));
            CHECK(!reading.figure.method.empty());
            CHECK_FALSE(info(reading.figure.symbol).rating);
            // It stands beside a figure of its type under the same conditions, so that it takes the place of that one.
            bool beside = false;
            for (const Figure& figure : part.figures) beside |= figure.symbol == reading.figure.symbol;
            CHECK(beside);
        }
    }
    CHECK(count >= 9);
}

TEST_CASE("types that only the demo bin has carry published figures in order", "[import][demo]") {
    const Demo demo;
    int own = 0;
    std::set<std::string> shipped;
    for (const PartRecord& record : starter_parts()) shipped.insert(record.part.name);
    for (const auto& [id, record] : demo.types) {
        if (shipped.count(record.part.name) != 0) continue;
        ++own;
        for (const Figure& figure : record.part.figures) {
            CAPTURE(record.part.name, format_figure(figure));
            CHECK(implausible(record.part, figure).empty());
            if (info(figure.symbol).rating) CHECK(figure.known == Known::marked);
            else CHECK(figure.known != Known::told);
        }
        const auto worst = [&](Symbol symbol) -> std::optional<double> {
            for (const Figure& figure : record.part.figures)
                if (figure.symbol == symbol) return figure.value.worst;
            return std::nullopt;
        };
        CAPTURE(record.part.name);
        if (const auto power = worst(Symbol::P_tot); power && worst(Symbol::R_thjc))  // by definition (IEC 60747-8)
            CHECK(*power == Approx((*worst(Symbol::T_jmax) - 298.15) / *worst(Symbol::R_thjc)).epsilon(0.02));
        if (const auto leak = worst(Symbol::I_R)) CHECK(*leak < 0.02 * *worst(Symbol::I_FAV));
    }
    CHECK(own >= 20);
}

TEST_CASE("the three lots measured beyond their types are suspect and no other lot is", "[import][demo]") {
    const Demo demo;
    std::set<std::string> suspect;
    for (const Lot& lot : demo.store.engine_lots())
        if (lot.suspect) suspect.insert(lot.label + ": " + lot.suspect_why);
    CHECK(suspect == std::set<std::string>{lot_label(119) + ": R_DS(on) measured 8.4 mΩ, and the type's limit is 6 mΩ",
                                           lot_label(124) + ": ESR measured 52 mΩ, and the type's limit is 45 mΩ",
                                           lot_label(129) + ": ESR measured 240 mΩ, and the type's limit is 23 mΩ"});
}

TEST_CASE("every label that files and documents of the demo speak of has its own check letter", "[import][demo]") {
    const Demo demo;
    int seen = 0;
    for (const char* path : {"app/demo/tide-gauge.toml", "app/demo/tide-gauge-22.toml", "app/demo/lantern.toml", "app/demo/bilge-alarm.toml", "README.md", "DEVELOPERS.md"}) {
        const std::string text = text_of(path);
        CAPTURE(path);
        CHECK(!text.empty());
        for (const std::string& label : labels_in(text)) {
            CAPTURE(label);
            const std::int64_t number = std::stoll(label);
            ++seen;
            CHECK(lot_label(number) == label);
            CHECK(demo.store.lot_labelled(label).has_value());
        }
    }
    CHECK(seen >= 8);
}

TEST_CASE("the demo goes into an empty bin only and leaves with one undo", "[import][demo]") {
    Store store(":memory:");
    store.apply(starter_edit(store));
    const auto before = store.parts();
    store.apply(demo_edit(store));
    CHECK_THROWS_WITH(demo_edit(store), "the demo goes into an empty bin, and this one holds lots");
    store.undo();
    CHECK(store.lots().empty());
    CHECK(store.parts() == before);
}
