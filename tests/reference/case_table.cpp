// SPDX-License-Identifier: GPL-3.0-or-later
// Reads tests/reference/cases.csv: plain commas, `#` comments, SI base units, banks as "C/ESR;C/ESR".
#include <fstream>
#include <map>
#include <sstream>
#include <stdexcept>

#include "tests/reference/time_domain.hpp"

namespace reference {
namespace {

std::vector<std::string> split(const std::string& text, char separator) {
    std::vector<std::string> parts;
    std::string part;
    std::istringstream stream(text);
    while (std::getline(stream, part, separator)) parts.push_back(part);
    if (!text.empty() && text.back() == separator) parts.emplace_back();
    return parts;
}

double number(const std::string& text, double otherwise) {
    if (text.empty()) return otherwise;
    size_t used = 0;
    const double value = std::stod(text, &used);
    if (used != text.size()) throw std::runtime_error("cases: not a number: " + text);
    return value;
}

std::vector<Capacitor> bank(const std::string& text) {
    std::vector<Capacitor> branches;
    for (const auto& branch : split(text, ';')) {
        const auto parts = split(branch, '/');
        if (parts.size() != 2) throw std::runtime_error("cases: a bank branch is C/ESR: " + text);
        branches.push_back({number(parts[0], 0), number(parts[1], 0)});
    }
    return branches;
}

const char* const kKinds[] = {"buck", "boost", "inverting", "sepic", "cuk", "zeta", "flyback"};
const char* const kLoads[] = {"current", "resistance", "power"};

template <size_t N>
int find(const char* const (&names)[N], const std::string& text) {
    for (size_t k = 0; k < N; ++k)
        if (text == names[k]) return static_cast<int>(k);
    throw std::runtime_error("cases: unknown word: " + text);
}

}  // namespace

std::string describe(const Converter& c) {
    std::ostringstream s;
    s.precision(12);
    s << c.name << ": " << kKinds[static_cast<int>(c.kind)] << " Vin " << c.vin;
    if (c.vout)
        s << " Vout " << *c.vout;
    else
        s << " duty " << c.duty;
    s << " load " << kLoads[static_cast<int>(c.load)] << ' ' << c.load_value << " f " << c.f << " source "
      << (c.feed == Feed::mean    ? "mean"
          : c.feed == Feed::stiff ? "stiff"
                                  : "impedance")
      << ' ' << c.source_R << '/' << c.source_L << " L1 " << c.L1 << '/' << c.R1 << " L2 " << c.L2 << '/' << c.R2
      << " k " << c.k << " n " << c.n << " switch " << c.r_switch << '+' << c.r_sense << " rectifier " << c.vt0 << '/'
      << c.rd;
    const auto bank = [&s](const char* name, const std::vector<Capacitor>& branches) {
        s << ' ' << name;
        for (const auto& branch : branches) s << ' ' << branch.C << '/' << branch.r;
    };
    bank("Cin", c.cin);
    bank("Cs", c.cs);
    bank("Co", c.co);
    return s.str();
}

std::vector<Converter> read_cases(const std::string& path) {
    std::ifstream file(path);
    if (!file) throw std::runtime_error("cannot read " + path);
    std::vector<Converter> cases;
    std::vector<std::string> names;
    std::string line;
    while (std::getline(file, line)) {
        if (line.empty() || line[0] == '#') continue;
        const auto cells = split(line, ',');
        if (names.empty()) {
            names = cells;
            continue;
        }
        if (cells.size() != names.size()) throw std::runtime_error("cases: wrong number of cells: " + line);
        std::map<std::string, std::string> row;
        for (size_t k = 0; k < cells.size(); ++k) row[names[k]] = cells[k];
        Converter c;
        c.name = row.at("name");
        c.kind = static_cast<Kind>(find(kKinds, row.at("topology")));
        const auto& source = row.at("source");
        if (source == "mean")
            c.feed = Feed::mean;
        else if (source == "stiff")
            c.feed = Feed::stiff;
        else {
            const auto parts = split(source, '/');
            if (parts.size() != 2) throw std::runtime_error("cases: a source is mean, stiff or R/L: " + source);
            c.feed = Feed::impedance;
            c.source_R = number(parts[0], 0);
            c.source_L = number(parts[1], 0);
        }
        c.vin = number(row.at("vin"), 0);
        if (!row.at("vout").empty()) c.vout = number(row.at("vout"), 0);
        c.duty = number(row.at("duty"), 0);
        c.load = static_cast<LoadKind>(find(kLoads, row.at("load")));
        c.load_value = number(row.at("load_value"), 0);
        c.f = number(row.at("f"), 0);
        c.L1 = number(row.at("L1"), 0);
        c.R1 = number(row.at("R1"), 0);
        c.L2 = number(row.at("L2"), 0);
        c.R2 = number(row.at("R2"), 0);
        c.k = number(row.at("k"), c.kind == Kind::flyback ? 1 : 0);
        c.n = number(row.at("n"), 1);
        c.r_switch = number(row.at("r_switch"), 0);
        c.r_sense = number(row.at("r_sense"), 0);
        c.vt0 = number(row.at("vt0"), 0);
        c.rd = number(row.at("rd"), 0);
        c.cin = bank(row.at("cin"));
        c.cs = bank(row.at("cs"));
        c.co = bank(row.at("co"));
        cases.push_back(c);
    }
    return cases;
}

}  // namespace reference
