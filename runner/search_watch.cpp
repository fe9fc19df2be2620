#include "runner/search_watch.hpp"

#include "runner/world/interrupt.hpp"

namespace halflsb {

SearchWatch::SearchWatch(const Desk& desk, const Options& options, int channels)
    : desk_(desk),
      error_style_(style_of(desk.terminal, Stream::err, options.colour)),
      started_(desk.clock.now()),
      time_limit_s_(options.time_limit_s),
      channels_(channels),
      live_(desk.terminal, desk.clock, !options.verbose && desk.answer == nullptr) {}

bool SearchWatch::go_on(int channel) {
    live_.update({static_cast<std::size_t>(channel), static_cast<std::size_t>(channels_),
                  "searching what channel " + std::to_string(channel) + " does", 0, 0, elapsed_s()});
    return has_time();
}

bool SearchWatch::has_time() const { return !interrupted() && !(time_limit_s_ && elapsed_s() > *time_limit_s_); }

void SearchWatch::warning(const std::string& text) { err("warning: " + text); }

void SearchWatch::greeted(const RunResult& run, std::optional<double>) { questions_ = run.cases_planned; }

void SearchWatch::progress(std::size_t place, std::int64_t samples_done, std::int64_t samples_total) {
    live_.update({place, questions_.size(), questions_[place - 1], samples_done, samples_total, elapsed_s()});
}

void SearchWatch::retrying(const RunResult& run, int attempt, const Error& reason) {
    err(questions_[run.cases.size()] + ": attempt " + std::to_string(attempt) +
        " gave no whole capture, it runs again: " + reason.problem);
}

double SearchWatch::elapsed_s() const { return to_seconds(desk_.clock.now() - started_); }

void SearchWatch::err(const std::string& text) {
    live_.erase();
    if (desk_.answer == nullptr) (void)desk_.terminal.write(Stream::err, wrapped(error_style_, text, 0));
}

}  // namespace halflsb
