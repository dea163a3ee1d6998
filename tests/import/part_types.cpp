// SPDX-License-Identifier: GPL-3.0-or-later
// Part types as delimited text: what is read of them, and every fault word for word at its place.
#include <catch2/catch.hpp>

#include "import/starter.hpp"
#include "tests/import/import_support.hpp"

using namespace binwright;
using namespace binwright::test;

namespace {

std::vector<std::string> refused(std::string_view text) {
    return faults_of([&] { return read_part_types(text, "parts.csv"); });
}
using Said = std::vector<std::string>;

}  // namespace

TEST_CASE("a row of part types becomes a part with its figures and how each is known", "[import][part-types]") {
    const auto parts = read_part_types(
        "family,name,technology,V_RRM,V_F,I_R\nrectifier,Dual 45 V,schottky,45 V,\"0.5 .. 0.55 .. 0.6 V @ 10 A, 25 °C | datasheet 0.5 V max @ 2 A, 125 °C\",\n", "parts.csv");
    REQUIRE(parts.size() == 1);
    const Part& part = parts.front().part;
    CHECK(parts.front().starter);
    CHECK(parts.front().id == 0);
    CHECK(part.family == Family::rectifier);
    CHECK(part.name == "Dual 45 V");
    CHECK(part.attributes == std::map<std::string, std::string>{{"technology", "schottky"}});
    REQUIRE(part.figures.size() == 3);
    CHECK(part.figures[0].symbol == Symbol::V_RRM);
    CHECK(part.figures[0].known == Known::marked);
    CHECK(part.figures[1].known == Known::kind);
    CHECK(part.figures[1].value == Spread{0.5, 0.55, 0.6});
    CHECK(part.figures[1].at.current == 10.0);
    CHECK(part.figures[2].known == Known::datasheet);
    CHECK(part.figures[2].column == Column::maximum);
    CHECK(*part.figures[2].at.temperature == Approx(398.15));
}

TEST_CASE("a file without a row of column names is refused", "[import][part-types]") {
    CHECK(refused("") == Said{"parts.csv:1:1: the file has no row of column names"});
    CHECK(refused("# only a comment\n") == Said{"parts.csv:1:1: the file has no row of column names"});
    CHECK(refused("family,U_R\ncapacitor,25 V\n") == Said{"parts.csv:1:1: there is no column \"name\""});
    CHECK(refused("V_DSS\n55 V\n") == Said{"parts.csv:1:1: there is no column \"family\"", "parts.csv:1:1: there is no column \"name\""});
}

TEST_CASE("an unknown column is named with the one that is near", "[import][part-types]") {
    CHECK(refused("family,name,V_DS\nswitch,a,55 V\n").front() == "parts.csv:1:13: unknown column \"V_DS\"; did you mean \"V_DSS\"?");
    CHECK(refused("family,name,shoe size\n") == Said{"parts.csv:1:13: unknown column \"shoe size\""});
    CHECK(refused("family,name,C,C\n") == Said{"parts.csv:1:15: the column \"C\" stands twice in the first row"});
}

TEST_CASE("a row with more or fewer fields than columns is refused", "[import][part-types]") {
    const std::string head = "family,name,C,U_R\n";
    CHECK(refused(head + "capacitor,a,1 µF,25 V,7\n") == Said{"parts.csv:2:23: the row has 5 fields, and there are 4 columns"});
    CHECK(refused(head + "capacitor,a,1 µF\n") == Said{"parts.csv:2:13: the row has 3 fields, and there are 4 columns"});
    CHECK(refused(head + "capacitor\n") == Said{"parts.csv:2:1: the row has 1 field, and there are 4 columns"});
}

TEST_CASE("a wrong unit or none or an unreadable figure is refused at its character", "[import][part-types]") {
    CHECK(refused("family,name,U_R\ncapacitor,a,25 A\n") == Said{"parts.csv:2:16: \"A\" is a current, not a voltage"});
    CHECK(refused("family,name,U_R\ncapacitor,a,25\n") == Said{"parts.csv:2:13: 25 has no unit, and U_R needs one. Write 25 V."});
    CHECK(refused("family,name,ESR\ncapacitor,a,\"30 mΩ @ 100 kHz, cold\"\n") == Said{"parts.csv:2:31: the condition \"cold\" has no unit that tells what it is"});
    // The second of two figures of one cell, after a word of how it is known, in quotes.
    CHECK(refused("family,name,I_R\nrectifier,a,\"2 mA @ 45 V, 25 °C | datasheet 15 V max @ 45 V, 100 °C\"\n") == Said{"parts.csv:2:48: \"V\" is a voltage, not a current"});
}

TEST_CASE("a name that stands twice is refused at the second one", "[import][part-types]") {
    CHECK(refused("family,name,U_R\ncapacitor,Wet,25 V\ncapacitor,dry,25 V\ncapacitor,wet,35 V\n") ==
          Said{"parts.csv:4:11: \"wet\" is the name of the part in line 2 already"});
    CHECK(refused("family,name,U_R\ncapacitor,,25 V\n") == Said{"parts.csv:2:11: the part has no name"});
}

TEST_CASE("what is no family and what belongs to another one is refused", "[import][part-types]") {
    CHECK(refused("family,name,U_R\nchoke,a,25 V\n") == Said{"parts.csv:2:1: \"choke\" is no family"});
    CHECK(refused("family,name,U_R,V_DSS\ncapacitor,a,25 V,55 V\n") == Said{"parts.csv:2:18: V_DSS is no figure of a capacitor"});
}

TEST_CASE("a rating is never typical of a kind and a spread goes from its best end to its worst", "[import][part-types]") {
    CHECK(refused("family,name,V_DSS\nswitch,a,kind 55 V\n") == Said{"parts.csv:2:15: V_DSS is a rating: printed or published, never typical of a kind"});
    CHECK(refused("family,name,ESR\ncapacitor,a,45 .. 30 .. 20 mΩ\n") == Said{"parts.csv:2:13: the best value stands first, and here lower is better"});
}

TEST_CASE("every fault of a file is told at once", "[import][part-types]") {
    CHECK(refused("family,name,U_R,wrong\ncapacitor,a,25 A,\nchoke,b,25 V,\ncapacitor,A,25 V,\n").size() == 4);
}
