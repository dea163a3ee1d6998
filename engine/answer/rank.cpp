// SPDX-License-Identifier: GPL-3.0-or-later
// The bin's lots for one seat: each judged there with everything else as fitted, best first.
#include <algorithm>
#include <atomic>
#include <cmath>
#include <exception>
#include <limits>
#include <mutex>
#include <thread>
#include <tuple>

#include "engine/answer/judge_setup.hpp"

namespace binwright {
namespace {

constexpr double kInfinite = std::numeric_limits<double>::infinity();
constexpr double kLongestLife = 15 * 365.25 * 86400;  // what has no life rule counts as the cap of those that have one [s]

Family family_at(Seat seat) {
    return seat == Seat::switch_ ? Family::switch_ : seat == Seat::rectifier ? Family::rectifier : Family::capacitor;
}

std::optional<double> stress_of(const SeatReport& report, Stress stress) {
    for (const Finding& finding : report.findings)
        if (finding.rule.stress == stress && finding.ground == Ground::rule && finding.stress) return finding.stress->value;
    return std::nullopt;
}

double preference_of(const SeatReport& report, const PartExposure& seen, Prefer prefer) {
    switch (prefer) {
        case Prefer::headroom: {
            double least = kInfinite;
            for (const Finding& finding : report.findings) least = std::min(least, finding.headroom.value_or(kInfinite));
            return least == kInfinite ? -kInfinite : least;
        }
        case Prefer::cool: {
            for (const Stress stress : {Stress::junction_temperature, Stress::hot_spot_temperature}) {
                if (const StressValue* value = seen.find(stress)) return -value->value;
                if (const auto value = stress_of(report, stress)) return -*value;
            }
            return -kInfinite;
        }
        case Prefer::life: {
            if (const StressValue* value = seen.find(Stress::life)) return value->value;
            if (const StressValue* value = seen.find(Stress::junction_temperature)) return -value->value;  // the cooler lives longer
            for (const auto& [stress, figure] : seen.missing)
                if (stress == Stress::life && figure != "life") return -kInfinite;
            return kLongestLife;
        }
        case Prefer::thrift: {
            // The smallest adequate ratings: how much of each is used, as a sum of logarithms.
            double sum = 0;
            int counted = 0;
            for (const Finding& finding : report.findings) {
                const Unit unit = info(finding.rule.stress).unit;
                if (finding.ground != Ground::rule || !finding.used || !(*finding.used > 0) || !finding.rule.rating || (unit != Unit::volt && unit != Unit::ampere)) continue;
                sum += std::log(*finding.used);
                ++counted;
            }
            return counted ? sum : -kInfinite;
        }
    }
    return 0;
}

int weight(Verdict verdict) {
    return verdict == Verdict::holds ? 0 : verdict == Verdict::unproven ? 1 : verdict == Verdict::rejected ? 2 : 3;
}

std::map<Seat, Verdict> verdicts_of(const std::vector<SeatReport>& reports) {
    std::map<Seat, Verdict> out;
    for (const SeatReport& report : reports) {
        const auto [at, fresh] = out.emplace(report.seat, report.verdict);
        if (!fresh) at->second = graver(at->second, report.verdict);
    }
    return out;
}

std::vector<Seat> others(Seat seat) {
    std::vector<Seat> out;
    for (const Seat one : kSeats)
        if (one != seat) out.push_back(one);
    return out;
}

}  // namespace

std::optional<Prefer> find_prefer(std::string_view text) {
    for (const Prefer one : {Prefer::headroom, Prefer::cool, Prefer::life, Prefer::thrift})
        if (to_string(one) == text) return one;
    return std::nullopt;
}

std::string_view to_string(Prefer prefer) {
    switch (prefer) {
        case Prefer::headroom: return "headroom";
        case Prefer::cool: return "cool";
        case Prefer::life: return "life";
        case Prefer::thrift: return "thrift";
    }
    return "";
}

std::vector<Candidate> rank(const Setup& setup, Seat seat, const std::vector<Lot>& lots, const Rulebook& book, Prefer prefer, const Progress& progress) {
    const auto fitted = setup.fitted.find(seat);
    int wanted = 0;
    std::vector<std::string> here;
    if (fitted != setup.fitted.end())
        for (const Fitted& entry : fitted->second) {
            wanted += entry.count;
            here.push_back(entry.lot.label);
        }
    if (wanted < 1) wanted = std::max(1, setup.converter.seat(seat).count);

    std::vector<Candidate> candidates;
    for (const Lot& lot : lots) {
        const bool in_place = !lot.label.empty() && std::find(here.begin(), here.end(), lot.label) != here.end();
        if (lot.part.family != family_at(seat) || (lot.count < 1 && !in_place)) continue;
        Candidate candidate;
        candidate.lot = lot;
        candidates.push_back(std::move(candidate));
    }

    std::map<Seat, Verdict> as_is;
    std::atomic<std::size_t> next{0}, done{0};
    std::atomic<bool> stop{false};
    std::mutex mutex;
    std::exception_ptr failure;
    const Progress going = [&](double) {
        if (progress && !stop && !progress(candidates.empty() ? 1.0 : static_cast<double>(done) / static_cast<double>(candidates.size() + 1))) stop = true;
        return !stop.load();
    };

    const auto one = [&](Candidate& candidate) {
        const bool in_place = std::find(here.begin(), here.end(), candidate.lot.label) != here.end() && !candidate.lot.label.empty();
        const int count = in_place && candidate.lot.count < 1 ? wanted : std::min(wanted, candidate.lot.count);
        PartExposure seen;
        if (const std::string why = not_covered_why(candidate.lot.part); !why.empty()) {
            JudgedPart part;
            part.seat = seat;
            part.reference = setup.converter.reference(seat);
            part.lot = candidate.lot;
            candidate.report = judge_part(part, book);
        } else {
            try {
                const Setup with = with_fitted(setup, seat, {Fitted{candidate.lot, count}});
                BothEnds ends;
                ends.worst = expose(with, End::worst, book.allowances, going);
                ends.best = ends.worst;
                const std::vector<Seat> all(std::begin(kSeats), std::end(kSeats));
                std::vector<SeatReport> reports = judge_setup(with, ends, book, all, false, going);
                // A break may be one of the worst end alone, and the best end then tells; and what holds must hold at both: a surge is
                // the greater the better the others are.
                const auto broken = [](const SeatReport& report) {
                    return std::any_of(report.findings.begin(), report.findings.end(), [](const Finding& finding) { return finding.verdict == Verdict::rejected; });
                };
                const auto holds_here = [&](const SeatReport& report) { return report.seat == seat && report.verdict == Verdict::holds; };
                const bool both = differs_between_ends(with) || std::any_of(reports.begin(), reports.end(), broken) || std::any_of(reports.begin(), reports.end(), holds_here);
                if (both) {
                    ends.best = expose(with, End::best, book.allowances, going);
                    reports = judge_setup(with, ends, book, others(seat), false, going);
                }
                candidate.report = judge_setup(with, ends, book, {seat}, true, going).front();
                const auto found = ends.worst.seats.find(seat);
                if (found != ends.worst.seats.end() && !found->second.empty()) seen = found->second.front();
                std::map<Seat, Verdict> now = verdicts_of(reports);
                now.erase(seat);
                for (const auto& [other, verdict] : now) {
                    const auto before = as_is.find(other);
                    if (before != as_is.end() && before->second != verdict)
                        candidate.knock_on.push_back(setup.converter.reference(other) + ": " + std::string(to_string(before->second)) + " becomes " +
                                                     std::string(to_string(verdict)));
                }
            } catch (const std::exception& error) {
                std::string why = error.what();
                if (const auto* input = dynamic_cast<const InputError*>(&error)) {
                    // Only what this lot does not say makes it unproven; what the file lacks is the caller's to mend.
                    const std::string here_at = "seat." + std::string(to_string(seat));
                    if (input->faults.empty() || input->faults.front().field != here_at) throw;
                    why = "its C is not on record, and nothing can be computed without it";
                } else if (dynamic_cast<const OutsideModel*>(&error) == nullptr) {
                    throw;
                }
                Finding finding = ground_finding(Ground::outside_model, why);
                if (dynamic_cast<const InputError*>(&error)) finding.verdict = Verdict::unproven;
                finding.seat = seat;
                finding.reference = setup.converter.reference(seat);
                finding.lot = candidate.lot.label;
                finding.part = candidate.lot.part.name;
                finding.book = book.name;
                candidate.report = SeatReport{};
                candidate.report.seat = seat;
                candidate.report.reference = finding.reference;
                candidate.report.lot = finding.lot;
                candidate.report.part = finding.part;
                candidate.report.verdict = finding.verdict;
                candidate.report.findings = {finding};
            }
        }
        candidate.preference = preference_of(candidate.report, seen, prefer);
        ++done;
    };

    try {  // with what is fitted, for comparison; where that cannot be computed there is nothing to compare with
        as_is = verdicts_of(judge_setup(setup, expose_both(setup, book.allowances, going), book, others(seat), false, going));
    } catch (const OutsideModel&) {
    } catch (const InputError&) {  // an empty seat that must be filled: the candidates fill it
    }
    const auto work = [&] {
        for (std::size_t k = next++; k < candidates.size() && !stop; k = next++) {
            try {
                one(candidates[k]);
            } catch (...) {
                const std::lock_guard lock(mutex);
                if (!failure) failure = std::current_exception();
                stop = true;
            }
        }
    };
    std::thread second(work);
    work();
    second.join();
    if (failure) std::rethrow_exception(failure);
    if (stop) throw Stopped();
    if (progress && !progress(1)) throw Stopped();

    std::stable_sort(candidates.begin(), candidates.end(), [](const Candidate& a, const Candidate& b) {
        return std::tuple(weight(a.report.verdict), -a.preference, a.lot.label) < std::tuple(weight(b.report.verdict), -b.preference, b.lot.label);
    });
    return candidates;
}

std::string_view to_string(Do action) {
    switch (action) {
        case Do::rating: return "rating";
        case Do::operating: return "operating";
        case Do::parallel: return "parallel";
        case Do::heatsink: return "heatsink";
        case Do::measure: return "measure";
        case Do::swap: return "swap";
    }
    return "";
}

}  // namespace binwright
