// SPDX-License-Identifier: GPL-3.0-or-later
// The window: the first line, the circuit strip, the sheet of the chosen seat, and the bin beside it.
#pragma once
#include <QLabel>
#include <QMainWindow>
#include <QTabWidget>
#include <memory>

#include "app/window/ask.hpp"
#include "app/window/bin_page.hpp"
#include "app/window/circuit_strip.hpp"
#include "app/window/document.hpp"
#include "app/window/judge.hpp"
#include "app/window/operating_line.hpp"
#include "app/window/seat_sheet.hpp"
#include "app/window/window.hpp"

namespace binwright {

class MainWindow : public QMainWindow {
    Q_OBJECT
  public:
    /// @param settings  whether state is read from and kept in the person's settings
    MainWindow(const WindowStart& start, Ask& ask, bool settings = true);
    ~MainWindow() override;

    void open(const QString& path);
    bool save();
    bool save_as();
    void new_converter();
    [[nodiscard]] const Document& document() const { return document_; }
    [[nodiscard]] Store& store() { return *store_; }
    [[nodiscard]] bool busy() const { return judge_.busy(); }
    [[nodiscard]] std::shared_ptr<const Judgement> judgement() const { return judgement_; }

  protected:
    void closeEvent(QCloseEvent* event) override;
    void dragEnterEvent(QDragEnterEvent* event) override;
    void dropEvent(QDropEvent* event) override;

  private:
    Ask& ask_;
    bool settings_;
    Document document_;
    std::unique_ptr<Store> store_;
    QString bin_name_;
    Judge judge_;
    std::shared_ptr<const Judgement> judgement_, kept_;
    Seat seat_ = Seat::output_capacitor;
    bool rank_due_ = false;

    QTabWidget* pages_;
    OperatingLine* line_;
    CircuitStrip* strip_;
    SeatSheet* sheet_;
    BinPage* bin_;

    void open_bin(const WindowStart& start);
    void make_menus();
    bool may_leave();
    void show_document();
    void judge_again();
    void rank_again();
    void change_value(const QString& key, const QString& value);
    void complain(const QString& text);
    void show_help();
    void show_about();
    [[nodiscard]] Setup setup() const;
    [[nodiscard]] const Rulebook& book() const;
};

}  // namespace binwright
