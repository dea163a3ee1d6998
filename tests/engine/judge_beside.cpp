// SPDX-License-Identifier: GPL-3.0-or-later
#include <catch2/catch.hpp>

#include "engine/words/words.hpp"
#include "tests/engine/exposure_support.hpp"

using namespace binwright;

namespace {

CheckReport checked(const std::string& extra, const std::vector<std::string>& with = {}) {
    return check(test::setup_of(test::supply_text("sepic", extra), with), *find_rulebook("house"));
}

const SeatReport* beside(const CheckReport& report, const std::string& name) {
    for (const SeatReport& one : report.beside)
        if (one.reference == name) return &one;
    return nullptr;
}

}  // namespace

TEST_CASE("a part across the output is held to its voltage and to nothing else", "[engine][answer][beside]") {
    const std::string part = "\n[[across]]\nname = \"filter\"\nbetween = \"output\"\ntechnology = \"aluminium\"\n\"U_R\" = \"";
    const CheckReport sound = checked(part + "25 V\"\n");
    REQUIRE(beside(sound, "filter") != nullptr);
    CHECK(beside(sound, "filter")->verdict == Verdict::holds);
    CHECK(beside(sound, "filter")->findings.size() == 2);  // repetitive, and once
    const CheckReport bad = checked(part + "10 V\"\n");
    CHECK(beside(bad, "filter")->verdict == Verdict::rejected);
    CHECK(bad.verdict == Verdict::rejected);
    CHECK(words(beside(bad, "filter")->findings.front()).mend.find("a 20 V part or higher") != std::string::npos);  // 15.45 V / 0.8
}

TEST_CASE("fuse, chokes and sense resistor are judged on what they carry", "[engine][answer][beside]") {
    // Charge balance: the mean input current at full load is P_out/(V_in·η), about 15.45 V · 2.5 A/10.5 V/0.85 = 4.3 A.
    const CheckReport all = checked("\n[fuse]\nrating = \"10 A\"\nmelting = \"60 A2s\"\n", {"winding.primary.saturation_current=20 A", "drive.sense_power=5 W"});
    REQUIRE(beside(all, "fuse") != nullptr);
    CHECK(beside(all, "fuse")->verdict == Verdict::holds);
    const Finding* mean = nullptr;
    for (const Finding& finding : beside(all, "fuse")->findings)
        if (finding.rule.id == "fuse-current") mean = &finding;
    REQUIRE(mean != nullptr);
    CHECK(mean->stress->value == Approx(4.3).epsilon(0.06));
    CHECK(beside(all, "primary winding")->verdict == Verdict::holds);
    CHECK(beside(all, "sense resistor")->verdict == Verdict::holds);
    const CheckReport weak = checked("\n[fuse]\nrating = \"5 A\"\nmelting = \"1 A2s\"\n", {"winding.primary.saturation_current=4 A", "drive.sense_power=1 W"});
    CHECK(beside(weak, "fuse")->verdict == Verdict::rejected);
    CHECK(beside(weak, "primary winding")->verdict == Verdict::rejected);
    CHECK(beside(weak, "sense resistor")->verdict == Verdict::rejected);
}

TEST_CASE("what the file does not say of a choke or a sense resistor leaves it unproven with its bound", "[engine][answer][beside]") {
    const CheckReport bare = checked("");
    CHECK(beside(bare, "fuse") == nullptr);
    for (const char* name : {"primary winding", "secondary winding", "sense resistor"}) {
        INFO(name);
        REQUIRE(beside(bare, name) != nullptr);
        CHECK(beside(bare, name)->verdict == Verdict::unproven);
        CHECK(words(beside(bare, name)->findings.front()).settle.find(" or more, read off the part or its data sheet") != std::string::npos);
    }
}

TEST_CASE("the two windings of one core are judged on what it sees of both", "[engine][answer][beside]") {
    const CheckReport coupled = checked("", {"winding.coupling=0.98", "winding.primary.saturation_current=20 A"});
    REQUIRE(beside(coupled, "coupled windings") != nullptr);
    CHECK(beside(coupled, "primary winding") == nullptr);
    // At the end of the on-time both currents add in the core: it is what the switch carries.
    const double core = beside(coupled, "coupled windings")->findings.front().stress->value;
    const StressValue* in_switch = coupled.exposure.seats.at(Seat::switch_).front().find(Stress::current_peak);
    REQUIRE(in_switch != nullptr);
    CHECK(core == Approx(in_switch->value).epsilon(0.03));
}
