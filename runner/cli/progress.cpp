#include "runner/cli/progress.hpp"

#include <algorithm>
#include <cmath>

#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr double shortest_case_s = 0.5;
constexpr double trusted_after_s = 1.0;
constexpr double redraw_s = 0.1;

std::string time_left_text(double seconds) {
    const auto whole = static_cast<std::int64_t>(std::llround(std::clamp(seconds, 0.0, 1e9)));
    if (whole < 60) return std::to_string(whole) + " s left";
    if (whole < 3600) return std::to_string(whole / 60) + " min " + std::to_string(whole % 60) + " s left";
    return std::to_string(whole / 3600) + " h " + std::to_string(whole % 3600 / 60) + " min left";
}

}  // namespace

std::string progress_text(const Progress& progress, int columns, bool unicode) {
    const auto room = static_cast<std::size_t>(std::max(columns, 1));
    const double part = progress.samples_total > 0
                            ? static_cast<double>(progress.samples_done) / static_cast<double>(progress.samples_total)
                            : 0.0;
    const double done = std::clamp(part, 0.0, 1.0);
    const std::string head = std::to_string(progress.case_place) + "/" + std::to_string(progress.cases) + " ";
    // Rounded down: 100 % is not shown before it is true.
    std::string tail =
        progress.samples_total > 0 ? "  " + std::to_string(static_cast<int>(done * 100.0)) + " %" : std::string();
    if (progress.elapsed_s >= trusted_after_s && done > 0.0) {
        tail += "  " + time_left_text(progress.elapsed_s * (1.0 - done) / done);
    }
    std::string name = printable(progress.name);
    const std::size_t beside = columns_of(head) + columns_of(tail);
    const std::size_t name_room = room > beside ? room - beside : 0;
    if (columns_of(name) > name_room) {
        const std::string ellipsis = unicode ? "…" : "...";
        const std::size_t taken = columns_of(ellipsis);
        name = name_room > taken ? std::string(first_columns(name, name_room - taken)) + ellipsis : "";
    }
    return std::string(first_columns(head + name + tail, room));
}

LiveLine::LiveLine(Terminal& terminal, const Clock& clock, bool enabled)
    : terminal_(terminal), clock_(clock), enabled_(enabled && can_redraw(terminal, Stream::err)) {}

LiveLine::~LiveLine() { erase(); }

void LiveLine::update(const Progress& progress) {
    if (!enabled_ || progress.elapsed_s < shortest_case_s) return;
    const Instant now = clock_.now();
    if (last_ && now - *last_ < seconds(redraw_s)) return;
    last_ = now;
    // One column stays free: many terminals wrap after the last one.
    const std::string text = progress_text(progress, columns_for(terminal_, Stream::err) - 1, shows_unicode(terminal_));
    // A live line that cannot be drawn is given up; the results go elsewhere.
    if (!terminal_.write(Stream::err, "\r\x1b[2K" + text)) enabled_ = false;
    drawn_ = true;
}

void LiveLine::erase() {
    if (!drawn_) return;
    drawn_ = false;
    if (!terminal_.write(Stream::err, "\r\x1b[2K")) enabled_ = false;
}

}  // namespace halflsb
