// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/answer/compare.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <tuple>

#include "engine/answer/judge_setup.hpp"
#include "engine/rule/stresses.hpp"

namespace binwright {
namespace {

auto key(const Allowances& a) {
    return std::tuple(a.switch_overshoot, a.rectifier_overshoot, a.sharing, a.aged_capacitance, a.aged_esr, a.measurement_expiry);
}

constexpr double kAlike = 0.005;  ///< less of a difference in headroom decides nothing

int weight(Verdict verdict) {
    return verdict == Verdict::holds ? 0 : verdict == Verdict::not_covered ? 1 : verdict == Verdict::unproven ? 2 : 3;
}

bool upper(const Rule& rule) { return rule.bound != BoundKind::at_least; }

}  // namespace

std::vector<UnderBook> under_books(const Setup& setup, Seat seat, const std::vector<const Rulebook*>& books, const Progress& progress) {
    std::vector<UnderBook> out;
    std::vector<std::pair<const Rulebook*, BothEnds>> seen;
    for (const Rulebook* book : books) {
        auto found = std::find_if(seen.begin(), seen.end(), [&](const auto& one) { return key(one.first->allowances) == key(book->allowances); });
        if (found == seen.end()) {
            seen.emplace_back(book, expose_both(setup, book->allowances, progress));
            found = std::prev(seen.end());
        }
        const std::vector<SeatReport> reports = judge_setup(setup, found->second, *book, {seat}, true, progress);
        if (!reports.empty()) out.push_back({book, reports.front()});
    }
    return out;
}

std::vector<StressUnderBooks> by_stress(const std::vector<UnderBook>& books) {
    std::vector<StressUnderBooks> out;
    for (const StressInfo& stress : stresses()) {
        StressUnderBooks one;
        one.stress = stress.stress;
        for (std::size_t k = 0; k < books.size(); ++k)
            for (const Finding& finding : books[k].report.findings)
                if (finding.ground == Ground::rule && !finding.rule.of_part && finding.rule.stress == stress.stress) one.entries.push_back({k, finding});
        if (one.entries.empty()) continue;
        std::stable_sort(one.entries.begin(), one.entries.end(), [](const auto& a, const auto& b) {
            const double none = std::numeric_limits<double>::infinity();
            const auto limit = [&](const Finding& finding) { return finding.limit ? (upper(finding.rule) ? *finding.limit : -*finding.limit) : none; };
            return limit(a.finding) < limit(b.finding);
        });
        out.push_back(std::move(one));
    }
    std::stable_sort(out.begin(), out.end(), [](const StressUnderBooks& a, const StressUnderBooks& b) {
        const auto gravest = [](const StressUnderBooks& one) {
            int most = 0;
            for (const auto& entry : one.entries) most = std::max(most, weight(entry.finding.verdict));
            return most;
        };
        return gravest(a) > gravest(b);
    });
    return out;
}

std::vector<SideBySide> side_by_side(const SeatReport& first, const SeatReport& second) {
    std::vector<SideBySide> out;
    for (const Finding& finding : first.findings) {
        SideBySide one;
        one.rule = finding.rule;
        one.first = finding;
        out.push_back(std::move(one));
    }
    for (const Finding& finding : second.findings) {
        const auto same = std::find_if(out.begin(), out.end(), [&](const SideBySide& one) { return one.rule.id == finding.rule.id && !one.second; });
        if (same != out.end()) {
            same->second = finding;
        } else {
            SideBySide one;
            one.rule = finding.rule;
            one.second = finding;
            out.push_back(std::move(one));
        }
    }
    for (SideBySide& one : out) {
        if (!one.first || !one.second) continue;
        const int a = weight(one.first->verdict), b = weight(one.second->verdict);
        if (a != b) one.better = a < b ? -1 : 1;
        else if (one.first->headroom && one.second->headroom && std::abs(*one.first->headroom - *one.second->headroom) > kAlike)
            one.better = *one.first->headroom > *one.second->headroom ? -1 : 1;
    }
    std::stable_sort(out.begin(), out.end(), [](const SideBySide& a, const SideBySide& b) {
        const auto rank = [](const SideBySide& one) {
            const bool differ = one.first.has_value() != one.second.has_value() || (one.first && one.second && one.first->verdict != one.second->verdict);
            double least = std::numeric_limits<double>::infinity();
            for (const auto* finding : {&one.first, &one.second})
                if (*finding && (*finding)->headroom) least = std::min(least, *(*finding)->headroom);
            return std::tuple(differ ? 0 : 1, least);
        };
        return rank(a) < rank(b);
    });
    return out;
}

}  // namespace binwright
