// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/ask.hpp"

#include <QFileDialog>
#include <QMessageBox>

namespace binwright {
namespace {

const QString kFiles = QStringLiteral("Converters (*.toml);;All files (*)");

class Dialogs : public Ask {
  public:
    Unsaved unsaved(QWidget* parent, const QString& name) override {
        const auto answer = QMessageBox::question(parent, QStringLiteral("Unsaved changes"), QStringLiteral("%1 has changes that are not saved.").arg(name),
                                                  QMessageBox::Save | QMessageBox::Discard | QMessageBox::Cancel, QMessageBox::Save);
        return answer == QMessageBox::Save ? Unsaved::save : answer == QMessageBox::Discard ? Unsaved::discard : Unsaved::stay;
    }
    std::optional<QString> open_file(QWidget* parent) override {
        const QString path = QFileDialog::getOpenFileName(parent, QStringLiteral("Open a converter"), QString(), kFiles);
        if (path.isEmpty()) return std::nullopt;
        return path;
    }
    std::optional<QString> save_file(QWidget* parent, const QString& proposal) override {
        const QString path = QFileDialog::getSaveFileName(parent, QStringLiteral("Save the converter"), proposal, kFiles);
        if (path.isEmpty()) return std::nullopt;
        return path;
    }
    bool sure(QWidget* parent, const QString& question) override {
        return QMessageBox::question(parent, QStringLiteral("Binwright"), question) == QMessageBox::Yes;
    }
    void tell(QWidget* parent, const QString& title, const QString& text) override {
        QMessageBox box(QMessageBox::NoIcon, title, text, QMessageBox::Ok, parent);
        box.setTextFormat(Qt::PlainText);
        box.exec();
    }
};

}  // namespace

Ask& dialogs() {
    static Dialogs real;
    return real;
}

}  // namespace binwright
