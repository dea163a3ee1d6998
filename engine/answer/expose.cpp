// SPDX-License-Identifier: GPL-3.0-or-later
// The worst over the operating range: a grid over every dimension that has a length, then a search around the worst point of
// each stress, since some stresses peak inside the range (a middle duty, the border of two modes, a resonance).
#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <atomic>
#include <cmath>
#include <exception>
#include <map>
#include <numbers>
#include <set>
#include <thread>

#include "engine/answer/exposure.hpp"
#include "engine/answer/operate.hpp"
#include "engine/answer/sight.hpp"

namespace binwright {
namespace {

/// A point of the range in shares 0 … 1 of each dimension, and which tolerance variant.
struct Spot {
    std::array<double, 5> share{};
    int variant = 0;
    friend bool operator<(const Spot& a, const Spot& b) {
        return a.variant != b.variant ? a.variant < b.variant : a.share < b.share;
    }
};

constexpr double kSearching = 1e-4;         ///< how well a point is known that is only compared with others
constexpr double kTightest = 0.999;         ///< coupling of two windings, as far as the network takes it
constexpr double kLeastLoad = 1e-3;          ///< of the highest load: with none at all, an output that must take pulses rises without end
constexpr std::size_t kWorthAThread = 12;   ///< points; a thread costs about as much as one of them

class Search {
  public:
    Search(const Setup& setup, End end, const Allowances& allowances, const Progress& progress)
        : setup_(setup), progress_(progress), range_(widened(setup.converter.operating)) {
        make_variants(end, allowances);
        sight_ = sight_of(benches_.front());
        find_resonances();
        worst_.assign(sight_.keys.size(), {});
        for (auto& solvers : solvers_) solvers = std::vector<Solver>(benches_.size());
    }

    Exposure run() {
        visit(make_grid(), 0, 0.5);
        refine();
        return collect();
    }

  private:
    struct Worst {
        bool any = false;
        double value = 0;
        Spot spot;
    };
    const Setup& setup_;
    const Progress& progress_;
    OperatingRange range_;
    std::vector<Bench> benches_;
    std::array<std::vector<Solver>, 2> solvers_;  ///< a thread's own, one a variant
    Sight sight_;
    std::vector<Worst> worst_;
    std::set<Spot> visited_;
    std::vector<double> resonances_;  ///< inside the range of the switching frequency, as shares of it; overtones too
    std::vector<std::string> warnings_;
    int points_ = 0, reached_ = 0;
    std::optional<Spot> unreached_;
    double most_loss_ = -1;
    Spot hottest_;
    bool runaway_ = false;

    static OperatingRange widened(OperatingRange range) {
        range.output_current.lowest = std::max(range.output_current.lowest, kLeastLoad * range.output_current.highest);
        if (range.output_tolerance) {
            range.output_voltage.lowest *= 1 - *range.output_tolerance;
            range.output_voltage.highest *= 1 + *range.output_tolerance;
        }
        return range;
    }

    /// Both ends of the tolerance of inductance, and of the coupling.
    void make_variants(End end, const Allowances& allowances) {
        const auto& winding = setup_.converter.winding;
        const double first = winding.primary ? winding.primary->tolerance.value_or(0) : 0;
        const double second = winding.secondary ? winding.secondary->tolerance.value_or(0) : first;
        std::vector<double> signs = first > 0 || second > 0 ? std::vector<double>{-1, 1} : std::vector<double>{0};
        std::vector<std::optional<double>> couplings = {std::nullopt};
        if (winding.coupling && !winding.coupling->single()) couplings = {winding.coupling->lowest, winding.coupling->highest};
        if (winding.leakage && !winding.leakage->single() && winding.primary) {
            couplings.clear();
            for (const double leakage : {winding.leakage->lowest, winding.leakage->highest})
                couplings.push_back(std::sqrt(std::max(0.0, 1 - leakage / winding.primary->inductance)));
        }
        // One value of a coupling or a leakage: what leaks may be half as much again, or half.
        if (winding.coupling && winding.coupling->single() && winding.coupling->highest > 0 && winding.coupling->highest < 1) {
            const double leaks = 1 - winding.coupling->highest;
            couplings = {1 - std::min(1.0, 1.5 * leaks), std::min(kTightest, 1 - 0.5 * leaks)};
        }
        if (winding.leakage && winding.leakage->single() && winding.leakage->highest > 0 && winding.primary) {
            couplings.clear();
            for (const double share : {0.5, 1.5})
                couplings.push_back(std::sqrt(std::max(0.0, 1 - share * winding.leakage->highest / winding.primary->inductance)));
        }
        Bench base = bench_of(setup_, end, allowances);
        for (const double sign : signs)
            for (const auto& coupling : couplings) {
                Bench bench = base;
                bench.primary_factor = 1 + sign * first;
                bench.secondary_factor = 1 + sign * second;
                bench.coupling = coupling;
                benches_.push_back(std::move(bench));
            }
    }

    /// Input filter, coupling capacitor with both windings, and with what leaks between them: a switching frequency that meets
    /// one of these, or whose overtone does, is a worst point inside the range; one nearby is worth a word.
    void find_resonances() {
        struct Resonance {
            const char* name;
            double frequency;
        };
        std::vector<Resonance> found;
        const auto sum_of = [](const std::vector<CapacitorValues>& bank) {
            double sum = 0;
            for (const CapacitorValues& one : bank) sum += one.capacitance;
            return sum;
        };
        const auto note = [&](const char* name, double inductance, double capacitance) {
            if (inductance > 0 && capacitance > 0) found.push_back({name, 1 / (2 * std::numbers::pi * std::sqrt(inductance * capacitance))});
        };
        const Range input = dimension(0);
        for (const Bench& bench : benches_)
            for (const double voltage : {input.lowest, input.middle(), input.highest}) {  // ceramics change with it
                At where = typical_point(setup_.converter);
                where.input_voltage = voltage;
                const Circuit circuit = circuit_of(setup_, bench.models, bench.end, where);
                if (circuit.source == SourceKind::impedance) note("the source's inductance with the input capacitor", circuit.source_inductance, sum_of(circuit.input));
                if (circuit.coupling_capacitor.empty()) continue;
                const double k = bench.coupling.value_or(circuit.coupling), series = sum_of(circuit.coupling_capacitor);
                const double first = circuit.primary.inductance * bench.primary_factor, second = circuit.secondary.inductance * bench.secondary_factor;
                note("the windings with the coupling capacitor", first + second - 2 * k * std::sqrt(first * second), series);
                if (k > 0) note("the leakage of the windings with the coupling capacitor", (1 - k * k) * second, series);
            }
        const Range f = dimension(3);
        for (const Resonance& one : found) {
            if (one.frequency > 0.5 * f.lowest && one.frequency < 2 * f.highest) {
                const std::string said = fmt::format("{}: resonant at {}, less than a factor of 2 from the switching frequency", one.name,
                                                     format_quantity(one.frequency, Unit::hertz));
                const bool told = std::any_of(warnings_.begin(), warnings_.end(), [&](const std::string& other) { return other.starts_with(one.name); });
                if (!told) warnings_.push_back(said);
            }
            for (int overtone = 1; overtone <= 3; ++overtone) {
                if (f.single()) break;
                const double share = (one.frequency / overtone - f.lowest) / (f.highest - f.lowest);
                const bool new_one = std::none_of(resonances_.begin(), resonances_.end(), [&](double other) { return std::abs(other - share) < 0.003; });
                if (share > 0 && share < 1 && new_one) resonances_.push_back(share);
            }
        }
        std::sort(resonances_.begin(), resonances_.end());
    }

    [[nodiscard]] Range dimension(int k) const { return range_.get(kOperating[k].quantity); }

    /// Currents are searched in logarithm where the range is wide: light load is where modes change.
    [[nodiscard]] bool logarithmic(int k) const {
        const Range range = dimension(k);
        return kOperating[k].quantity == OperatingQuantity::output_current && range.lowest > 0 && range.highest > 4 * range.lowest;
    }

    [[nodiscard]] At at(const Spot& spot) const {
        At at;
        for (int k = 0; k < 5; ++k) {
            const Range range = dimension(k);
            const double s = spot.share[k];
            double value = range.lowest + s * (range.highest - range.lowest);
            if (s == 1) value = range.highest;
            if (logarithmic(k) && s > 0 && s < 1) value = range.lowest * std::pow(range.highest / range.lowest, s);
            at.set(kOperating[k].quantity, value);
        }
        const OperatingRange& given = setup_.converter.operating;
        if (given.load == LoadKind::resistance)  // fixed at the top of both ranges
            at.output_current = at.output_voltage * given.output_current.highest / given.output_voltage.highest;
        if (given.load == LoadKind::power) at.output_current = given.output_voltage.highest * given.output_current.highest / at.output_voltage;
        return at;
    }

    [[nodiscard]] std::vector<double> marks(int k) const {
        if (dimension(k).single()) return {0};
        switch (kOperating[k].quantity) {
            case OperatingQuantity::input_voltage:
            case OperatingQuantity::output_voltage: return {0, 0.5, 1};
            case OperatingQuantity::output_current:
                if (setup_.converter.operating.load != LoadKind::current) return {1};
                return {0, 0.5, 0.8, 1};
            case OperatingQuantity::frequency: {
                std::vector<double> all = {0};
                all.insert(all.end(), resonances_.begin(), resonances_.end());
                all.push_back(1);
                return all;
            }
            default: return {0, 1};
        }
    }

    std::vector<Spot> make_grid() const {
        std::vector<Spot> grid;
        for (int variant = 0; variant < static_cast<int>(benches_.size()); ++variant)
            for (const double a : marks(0))
                for (const double b : marks(1))
                    for (const double c : marks(2))
                        for (const double d : marks(3))
                            for (const double e : marks(4)) {
                                // The cold end at corners only: temperatures peak at the hot one, blocking voltages may not.
                                // Likewise the further variants: what peaks inside the range at one of them is found by the search.
                                const bool inside = a == 0.5 || b == 0.5 || (c > 0 && c < 1);
                                const bool cold = e < 1 && !dimension(4).single();
                                if (inside && (cold || variant > 0)) continue;
                                if (d > 0 && d < 1 && (cold || c < 1)) continue;  // resonances: where most flows
                                grid.push_back({{a, b, c, d, e}, variant});
                            }
        return grid;
    }

    void report(double share) const {
        if (progress_ && !progress_(share)) throw Stopped();
    }

    /// What is kept of one point.
    struct Seen {
        std::vector<double> values;
        bool reached = false, stable = false;
        double loss = 0;
        std::vector<std::string> warnings;
    };

    /// A point that cannot be computed is not left out: the fault says where it lies.
    static Operated operated_at(const Bench& bench, const At& where, Solver& solver) {
        try {
            return operate(bench, where, solver, kSearching);
        } catch (const OutsideModel& error) {
            throw OutsideModel(fmt::format("at input {}, output {} and {}: {}", format_quantity(where.input_voltage, Unit::volt),
                                           format_quantity(where.output_voltage, Unit::volt), format_quantity(where.output_current, Unit::ampere), error.what()));
        }
    }

    Seen see(const Spot& spot, std::vector<Solver>& solvers) const {
        const Bench& bench = benches_[spot.variant];
        const At where = at(spot);
        const Operated operated = operated_at(bench, where, solvers[spot.variant]);
        Seen seen{look(bench, sight_, where, operated), operated.state.reached, operated.stable, 0, operated.state.warnings};
        for (const Loss& one : operated.losses) seen.loss += one.power;
        return seen;
    }

    void keep(const Spot& spot, const Seen& seen) {
        ++points_;
        if (seen.reached) ++reached_;
        else if (!unreached_) unreached_ = spot;
        if (!seen.stable) runaway_ = true;
        if (seen.stable && seen.loss > most_loss_) most_loss_ = seen.loss, hottest_ = spot;
        for (const std::string& warning : seen.warnings)
            if (std::find(warnings_.begin(), warnings_.end(), warning) == warnings_.end() && warnings_.size() < 8) warnings_.push_back(warning);
        for (std::size_t k = 0; k < seen.values.size(); ++k) {
            if (!std::isfinite(seen.values[k])) continue;
            Worst& worst = worst_[k];
            const bool worse = !worst.any || (sight_.keys[k].lowest_is_worst() ? seen.values[k] < worst.value : seen.values[k] > worst.value);
            if (worse) worst = {true, seen.values[k], spot};
        }
        visited_.insert(spot);
    }

    /// Looks at those not seen before, on two threads where there are enough of them; keeps them in their order. Progress runs from one share to the other.
    void visit(std::vector<Spot> spots, double from, double to) {
        std::set<Spot> fresh;
        std::erase_if(spots, [&](const Spot& spot) { return visited_.count(spot) > 0 || !fresh.insert(spot).second; });
        std::vector<Seen> seen(spots.size());
        std::atomic<bool> halt{false};
        std::exception_ptr wrong[2];
        // Every second point each: what a solver saw before never depends on the clock, nor does the last digit.
        const std::size_t threads = spots.size() < kWorthAThread ? 1 : 2;
        const auto work = [&](int thread) {
            try {
                for (std::size_t k = thread; k < spots.size() && !halt; k += threads) {
                    seen[k] = see(spots[k], solvers_[thread]);
                    if (thread == 0) report(from + (to - from) * static_cast<double>(k + 1) / static_cast<double>(spots.size()));
                }
            } catch (...) {
                wrong[thread] = std::current_exception();
                halt = true;
            }
        };
        if (threads == 1) {
            work(0);
        } else {
            std::thread other(work, 1);
            work(0);
            other.join();
        }
        for (const std::exception_ptr& one : wrong)
            if (one) std::rethrow_exception(one);
        for (std::size_t k = 0; k < spots.size(); ++k) keep(spots[k], seen[k]);
    }

    [[nodiscard]] bool at_corner(const Spot& spot) const {
        for (int d = 0; d < 4; ++d)
            if (!dimension(d).single() && spot.share[d] > 0 && spot.share[d] < 1) return false;
        return true;
    }

    /// Compass search from the worst grid point of every stress, all of them together. From a corner a short look inwards tells
    /// whether the range hides more; inside, the step is halved until the point is known to a four hundredth of the range.
    void refine() {
        struct Walk {
            std::size_t key;
            double step;
            Spot from;
        };
        std::vector<Walk> walks;
        for (std::size_t k = 0; k < worst_.size(); ++k)
            if (worst_[k].any) walks.push_back({k, at_corner(worst_[k].spot) ? 0.06 : 0.25, {}});
        constexpr int kRounds = 24;
        for (int round = 0; round < kRounds && !walks.empty(); ++round) {
            std::vector<Spot> around;
            for (Walk& walk : walks) {
                walk.from = worst_[walk.key].spot;
                for (int d = 0; d < 4; ++d) {
                    if (dimension(d).single()) continue;
                    if (d == 2 && setup_.converter.operating.load != LoadKind::current) continue;
                    for (const double sign : {-1.0, 1.0}) {
                        Spot to = walk.from;
                        to.share[d] = std::clamp(walk.from.share[d] + sign * walk.step, 0.0, 1.0);
                        if (to.share[d] != walk.from.share[d]) around.push_back(to);
                    }
                }
            }
            visit(std::move(around), 0.5 + 0.5 * round / kRounds, 0.5 + 0.5 * (round + 1) / kRounds);
            std::erase_if(walks, [&](Walk& walk) {
                const Spot& now = worst_[walk.key].spot;
                if (now < walk.from || walk.from < now) return false;
                if (at_corner(now)) return true;
                walk.step *= 0.5;
                return !(walk.step > 0.0025);
            });
        }
    }

    Exposure collect() {
        Exposure exposure;
        for (const Seat seat : kSeats) {
            if (!has_seat(*setup_.converter.topology, seat)) continue;
            const auto fitted = setup_.fitted.find(seat);
            exposure.seats[seat].resize(fitted == setup_.fitted.end() ? 1 : fitted->second.size());
        }
        exposure.beside.resize(benches_.front().beside.size());
        std::map<Spot, Operated> again;
        const auto operated_at = [&](const Spot& spot) -> const Operated& {
            const auto found = again.find(spot);
            if (found != again.end()) return found->second;
            return again.emplace(spot, operate(benches_[spot.variant], at(spot), solvers_[0][spot.variant])).first->second;
        };
        for (std::size_t k = 0; k < sight_.keys.size(); ++k) {
            const StressKey& key = sight_.keys[k];
            if (!worst_[k].any) continue;
            const Spot& spot = worst_[k].spot;
            PartExposure& of = key.beside >= 0 ? exposure.beside[static_cast<std::size_t>(key.beside)] : exposure.seats[key.seat][key.entry];
            of.stresses.push_back(explain(benches_[spot.variant], key, at(spot), operated_at(spot)));
        }
        for (const Sight::Missing& missing : sight_.missing)
            exposure.seats[missing.seat][missing.entry].missing.emplace_back(missing.stress, missing.figure);

        StressValue regulation;
        regulation.stress = Stress::regulation;
        regulation.value = points_ > 0 ? static_cast<double>(reached_) / points_ : 0;
        if (unreached_) {
            regulation.at = at(*unreached_);
            const SteadyState& state = operated_at(*unreached_).state;
            if (state.highest_output > 0 && state.least_load == 0)
                regulation.rests_on.push_back(fmt::format("there the output reaches {}", format_quantity(state.highest_output, Unit::volt)));
            if (state.least_load > 0)
                regulation.rests_on.push_back(fmt::format("there the least load that regulates is {}", format_quantity(state.least_load, Unit::ampere)));
        } else {
            regulation.at = at(hottest_);
        }
        regulation.made_of = {{"share of points reached", regulation.value}};
        exposure.converter.stresses.push_back(regulation);

        exposure.runaway = runaway_;
        exposure.warnings = warnings_;
        exposure.not_included = benches_.front().not_included;
        exposure.assumptions = benches_.front().assumptions;
        if (most_loss_ >= 0) {
            const Operated& hottest = operated_at(hottest_);
            exposure.hottest = at(hottest_);
            exposure.losses = hottest.losses;
            exposure.efficiency_total = hottest.state.input_power > 0 ? hottest.state.output_power / hottest.state.input_power : 0;
            if (hottest.gate_power > 0)
                exposure.assumptions.push_back(fmt::format("gate drive takes {} from the drive supply, not counted in the efficiency",
                                                           format_quantity(hottest.gate_power, Unit::watt)));
        }
        if (setup_.converter.operating.output_current.lowest < range_.output_current.lowest)
            exposure.assumptions.push_back(fmt::format("a load of {} counted as {}: with none, an output that must take the shortest pulses rises without end",
                                                       format_quantity(setup_.converter.operating.output_current.lowest, Unit::ampere),
                                                       format_quantity(range_.output_current.lowest, Unit::ampere)));
        if (!setup_.converter.drive.maximum_duty) exposure.assumptions.push_back("no duty limit is given");
        const auto& winding = setup_.converter.winding;
        const bool coupled = winding.coupling && winding.coupling->single() && winding.coupling->highest > 0 && winding.coupling->highest < 1;
        if (coupled || (winding.leakage && winding.leakage->single() && winding.leakage->highest > 0))
            exposure.assumptions.push_back("the leakage of the windings taken as uncertain by half");
        if (!setup_.converter.operating.output_tolerance) exposure.assumptions.push_back("no output_tolerance is given: the output is taken as exactly what is set");
        if (winding.primary && !winding.primary->tolerance) exposure.assumptions.push_back("no tolerance is given for the windings: their inductance is taken as exact");
        if (!setup_.converter.source) exposure.assumptions.push_back("no [source]: the input capacitor carries all of the input ripple");
        return exposure;
    }
};

}  // namespace

Exposure expose(const Setup& setup, End end, const Allowances& allowances, const Progress& progress) {
    return Search(setup, end, allowances, progress).run();
}

}  // namespace binwright
