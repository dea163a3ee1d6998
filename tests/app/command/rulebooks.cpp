// SPDX-License-Identifier: GPL-3.0-or-later
// Rulebooks as scripts see them: the same converter under each, faults of a file, comparisons, and what is wanted.
#include <catch2/catch.hpp>
#include <map>
#include <set>
#include <sstream>

#include "tests/app/command/program.hpp"

using namespace binwright::testing;
using nlohmann::json;

namespace {

struct Demo : Folder {
    Demo() { write("app/demo/tide-gauge.toml", source_file("app/demo/tide-gauge.toml")); }
    [[nodiscard]] json check(const std::string& book) const { return run({"--json", "check", "app/demo/tide-gauge.toml", "--rulebook", book}).json(); }
};

}  // namespace

TEST_CASE("the demo's converter gets other verdicts under each published rulebook and each finding names its clause", "[command][rulebook]") {
    const Demo demo;
    // Level III, or the only one, of each: verdicts of Q1, D1, C1, C2, C3. 12 V at a 20 V gate are 60 %: half is allowed at GJB/Z 35's level I;
    // 34.1 V across 45 V are 76 %: 80 % are allowed by the house and at GJB/Z 35's level III, 70 to 75 % elsewhere.
    const std::map<std::string, std::vector<std::string>> wanted = {
        {"house", {"holds", "holds", "holds", "holds", "holds"}},
        {"gjb-z-35:I", {"rejected", "rejected", "rejected", "holds", "not covered"}},
        {"gjb-z-35:III", {"holds", "holds", "holds", "holds", "not covered"}},
        {"eee-inst-002", {"holds", "rejected", "not covered", "holds", "not covered"}},
        {"ecss-q-st-30-11c", {"holds", "rejected", "not covered", "holds", "not covered"}},
        {"mil-hdbk-338b", {"holds", "rejected", "holds", "holds", "not covered"}},
        {"ipc-9592", {"not covered", "not covered", "holds", "not covered", "not covered"}},
        {"mil-dtl-917", {"not covered", "not covered", "not covered", "not covered", "not covered"}},
    };
    for (const auto& [book, verdicts] : wanted) {
        INFO(book);
        const json answer = demo.check(book);
        std::vector<std::string> got;
        for (const json& seat : answer.at("seats")) {
            got.push_back(seat.at("verdict"));
            for (const json& finding : seat.at("findings")) {
                if (finding.at("ground") != "rule" || book == "house" || finding.at("rulebook") == "ratings") continue;
                INFO(finding.at("text").get<std::string>());
                CHECK(finding.at("rulebook").get<std::string>().starts_with(book));
                if (finding.at("verdict") != "not covered") CHECK_FALSE(finding.at("clause").get<std::string>().empty());
                CHECK(finding.at("known") != "common practice");
            }
        }
        CHECK(got == verdicts);
    }
}

TEST_CASE("a rulebook with ten planted faults reports all of them in one go with line and column", "[command][rulebook]") {
    const Folder folder;
    for (const char* name : {"rulebook-ten-faults.toml", "rulebook-ten-more-faults.toml"}) {
        folder.write("mine.toml", source_file(std::string("tests/broken/") + name));
        const Answer answer = folder.run({"rulebook", "validate", "mine.toml"});
        CHECK(answer.status == 2);
        std::istringstream lines(answer.err);
        int placed = 0;
        for (std::string line; std::getline(lines, line);) {
            int row = 0, column = 0;
            placed += std::sscanf(line.c_str(), "mine.toml:%d:%d: ", &row, &column) == 2 && row > 0 && column > 0;
        }
        CHECK(placed >= 10);
        const Answer as_json = folder.run({"--json", "rulebook", "validate", "mine.toml"});
        CHECK(static_cast<int>(as_json.errors().size()) == placed);
    }
}

TEST_CASE("a rulebook of one's own is based on a shipped one or on a file beside it", "[command][rulebook]") {
    const Demo demo;
    demo.write("mine.toml", "kind = \"rulebook\"\nformat = 1\nbased_on = \"house\"\n[[rule]]\nid = \"rectifier-voltage\"\nat_most = 0.7\nsource = \"my own bench\"\nknown = \"seen\"\n");
    demo.write("stricter.toml", "kind = \"rulebook\"\nformat = 1\nbased_on = \"mine.toml\"\nwithout = [\"output-ripple\"]\n");
    for (const char* book : {"mine.toml", "stricter.toml"}) {
        INFO(book);
        bool found = false;
        const json answer = demo.check(book);
        for (const json& seat : answer.at("seats"))
            for (const json& finding : seat.at("findings"))
                if (finding.at("rule") == "rectifier-voltage") {
                    found = true;
                    CHECK(finding.at("verdict") == "rejected");
                    CHECK(finding.at("rulebook") == "mine");
                    CHECK(finding.at("source") == "my own bench");
                }
        CHECK(found);
    }
    demo.write("itself.toml", "kind = \"rulebook\"\nformat = 1\nbased_on = \"itself.toml\"\n");
    CHECK(demo.run({"rulebook", "validate", "itself.toml"}).status == 2);
    const std::string said = demo.run({"rulebook", "validate", "mine.toml"}).out;
    CHECK(said.starts_with("mine.toml: "));
    CHECK(said.ends_with(" rules, nothing wrong\n"));
    CHECK(demo.run({"rulebook", "show", "gjb-z-35:IV"}).status == 2);
    CHECK(demo.run({"rulebook", "show", "gjb-z-35:II"}).status == 0);
}

TEST_CASE("a lot is compared under rulebooks and two lots rule by rule", "[command][rulebook]") {
    const Demo demo;
    const json books = demo.run({"--json", "rulebook", "compare", "app/demo/tide-gauge.toml", "rectifier", "--by", "house", "--by", "gjb-z-35:II"}).json();
    REQUIRE(books.at("rulebooks").size() == 2);
    CHECK(books.at("rulebooks")[0].at("verdict") == "holds");
    CHECK(books.at("rulebooks")[1].at("verdict") == "rejected");
    CHECK(books.at("stresses")[0].at("limits")[0].at("rulebook") == "gjb-z-35:II");
    const json lots = demo.run({"--json", "--bin", "demo", "rulebook", "compare", "app/demo/tide-gauge.toml", "D1", "102-L", "107-S"}).json();
    bool voltage = false;
    for (const json& rule : lots.at("rules"))
        if (rule.at("rule") == "rectifier-voltage") {
            voltage = true;
            CHECK(rule.at("better") == "second");  // 60 V against 45 V
        }
    CHECK(voltage);
    CHECK(demo.run({"--bin", "demo", "rulebook", "compare", "app/demo/tide-gauge.toml", "D1", "101-K"}).status == 2);
    CHECK(demo.run({"--bin", "demo", "rank", "app/demo/tide-gauge.toml", "D1", "--rulebook", "mil-hdbk-338b:I", "--quiet"}).out.find("rulebook mil-hdbk-338b:I") != std::string::npos);
}

TEST_CASE("what is wanted is a line for the junk box", "[command][wanted]") {
    const Demo demo;
    const Answer answer = demo.run({"--json", "wanted", "app/demo/tide-gauge.toml", "input_capacitor"});
    CHECK(answer.status == 0);
    const json body = answer.json();
    CHECK(body.at("found") == true);
    CHECK(body.at("text").get<std::string>().starts_with("C1: an aluminium capacitor, "));
    std::set<std::string> figures;
    for (const json& line : body.at("lines")) {
        figures.insert(line.at("figure"));
        CHECK((line.contains("at_least") || line.contains("at_most")));
        CHECK_FALSE(line.at("rules").empty());
    }
    CHECK(figures.contains("U_R"));
    CHECK(demo.run({"wanted", "app/demo/tide-gauge.toml", "input_capacitor", "--rulebook", "gjb-z-35:I", "--quiet"}).out == "C1: no aluminium capacitor holds here, whatever its ratings\n");
    CHECK(demo.run({"wanted", "app/demo/tide-gauge.toml", "input_capacitor", "--kind", "filmy"}).status == 2);
}
