// SPDX-License-Identifier: GPL-3.0-or-later
// Judging off the window's thread: the newest question wins, older ones are stopped, answers come back as signals.
#pragma once
#include <QObject>
#include <QString>
#include <atomic>
#include <map>
#include <memory>
#include <thread>
#include <vector>

#include "engine/answer/judge.hpp"

namespace binwright {

/// One conduction interval at one operating point: its share of the period and the mean current of every branch in it.
struct IntervalView {
    double share;
    bool switch_on, rectifier_on;
    std::map<std::string, double> current;  ///< "switch", "primary", "output_capacitor" …
};

struct Judgement {
    Setup setup;
    CheckReport report;
    At drawn_at;                          ///< where the intervals were taken
    std::vector<IntervalView> intervals;
};

struct Ranking {
    Seat seat;
    std::vector<Candidate> candidates;
};

class Judge : public QObject {
    Q_OBJECT
  public:
    explicit Judge(QObject* parent = nullptr);
    ~Judge() override;
    void check(Setup setup, Rulebook book);
    void rank(Setup setup, Seat seat, std::vector<Lot> lots, Rulebook book, Prefer prefer);
    void cancel();      ///< both, without an answer
    void cancel_rank();
    [[nodiscard]] bool busy() const { return checking_ > 0 || ranking_ > 0; }

  signals:
    void checked(std::shared_ptr<const Judgement> judgement);
    void ranked(std::shared_ptr<const Ranking> ranking);
    void failed(const QString& text);       ///< the check: nothing stands
    void rank_failed(const QString& text);
    void progressed(double share);  ///< of the ranking
    void idle();

  private:
    struct Line {
        std::thread thread;
        std::shared_ptr<std::atomic<bool>> stop, done;
    };
    Line check_, rank_;
    std::vector<Line> leaving_;  ///< told to stop, and not waited for: the window's thread goes on at once
    int checking_ = 0, ranking_ = 0;
    void leave(Line& line);
    void sweep(bool wait);
    void settle();
};

/// The conduction intervals of a setup at one point, with mean branch currents.
[[nodiscard]] std::vector<IntervalView> intervals_at(const Setup& setup, const At& at);

}  // namespace binwright
