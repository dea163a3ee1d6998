// SPDX-License-Identifier: GPL-3.0-or-later
// Lots measured beyond what their type allows: marked so in the bin, as long as the reading counts.
#include <catch2/catch.hpp>

#include "catalog/store.hpp"

using namespace binwright;

namespace {

ReadingRecord reading(Symbol symbol, const char* text, bool aside = false) {
    ReadingRecord one;
    one.figure = parse_figure(symbol, text, Known::measured);
    one.set_aside = aside;
    return one;
}

/// A published switch, whose limits are those of a data sheet.
PartRecord published() {
    PartRecord type;
    type.part.family = Family::switch_;
    type.part.name = "N-MOSFET 60 V";
    type.part.figures = {parse_figure(Symbol::V_DSS, "60 V", Known::marked), parse_figure(Symbol::R_DSon, "17.5 mΩ max @ 10 V", Known::datasheet),
                         parse_figure(Symbol::V_GSth, "2 V min", Known::datasheet), parse_figure(Symbol::V_GSth, "4 V max", Known::datasheet)};
    return type;
}

}  // namespace

TEST_CASE("a lot is suspect when any reading that counts lies outside the limits of its type", "[catalog][suspect]") {
    LotRecord lot;
    lot.number = 7;
    const auto why = [&](const std::vector<ReadingRecord>& readings) {
        const Lot judged = as_lot(published(), lot, readings);
        CHECK(judged.suspect == !judged.suspect_why.empty());
        return judged.suspect_why;
    };
    CHECK(why({}).empty());
    CHECK(why({reading(Symbol::R_DSon, "17.5 mΩ @ 10 V"), reading(Symbol::V_GSth, "3.1 V"), reading(Symbol::V_DSS, "68 V")}).empty());
    CHECK(why({reading(Symbol::R_DSon, "22 mΩ @ 10 V")}) == "R_DS(on) measured 22 mΩ, and the type's limit is 17.5 mΩ");
    CHECK(why({reading(Symbol::R_DSon, "22 mΩ")}) == "R_DS(on) measured 22 mΩ, and the type's limit is 17.5 mΩ");  // 10 V is usual
    CHECK(why({reading(Symbol::V_GSth, "1.2 V")}) == "V_GS(th) measured 1.2 V, and the type's limit is 2 V");
    CHECK(why({reading(Symbol::V_GSth, "4.6 V")}) == "V_GS(th) measured 4.6 V, and the type's limit is 4 V");
    CHECK(why({reading(Symbol::V_DSS, "55 V")}) == "V_DSS measured 55 V, and the type's limit is 60 V");
    // A good reading beside it does not clear the lot; setting the bad one aside does.
    CHECK(!why({reading(Symbol::R_DSon, "15 mΩ @ 10 V"), reading(Symbol::R_DSon, "22 mΩ @ 10 V")}).empty());
    CHECK(why({reading(Symbol::R_DSon, "15 mΩ @ 10 V"), reading(Symbol::R_DSon, "22 mΩ @ 10 V", true)}).empty());
}

TEST_CASE("a rating is never measured up and a reading below it does not replace it either", "[catalog][suspect]") {
    LotRecord lot;
    lot.number = 7;
    for (const char* breakdown : {"68 V", "55 V"}) {
        const Lot judged = as_lot(published(), lot, {reading(Symbol::V_DSS, breakdown)});
        int ratings = 0;
        for (const Figure& figure : judged.part.figures)
            if (figure.symbol == Symbol::V_DSS) {
                ++ratings;
                CHECK(figure.value.worst == 60);
                CHECK(figure.known == Known::marked);
            }
        CHECK(ratings == 1);
    }
}

TEST_CASE("a spread of the kind is no limit and a reading beyond it is what the lot is", "[catalog][suspect]") {
    PartRecord type = published();
    type.part.figures = {parse_figure(Symbol::R_DSon, "12 .. 15 .. 17.5 mΩ @ 10 V", Known::kind)};
    LotRecord lot;
    lot.number = 7;
    const Lot judged = as_lot(type, lot, {reading(Symbol::R_DSon, "22 mΩ @ 10 V")});
    CHECK_FALSE(judged.suspect);
    REQUIRE(judged.part.figures.size() == 1);
    CHECK(judged.part.figures.front().value.worst == 0.022);
}

TEST_CASE("a suspect lot stays so in the bin and in every view of it until the reading is set aside", "[catalog][suspect]") {
    Store store(":memory:");
    LotRecord lot;
    lot.part_id = -1;
    ReadingRecord bad = reading(Symbol::R_DSon, "22 mΩ @ 10 V");
    bad.lot_id = -2;
    store.apply({"add", {Change<PartRecord>{{}, published()}, Change<LotRecord>{{}, lot}, Change<ReadingRecord>{{}, bad}}});
    lot = store.lots().front();
    CHECK(store.engine_lots().front().suspect);
    CHECK(store.engine_lot(lot_label(lot.number))->suspect);
    bad = store.readings(lot.id).front();
    ReadingRecord aside = bad;
    aside.set_aside = true;
    store.apply({"set aside", {Change<ReadingRecord>{bad, aside}}});
    CHECK_FALSE(store.engine_lots().front().suspect);
    store.undo();
    CHECK(store.engine_lots().front().suspect);
}
