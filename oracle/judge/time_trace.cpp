#include "oracle/judge/time_trace.hpp"

#include <algorithm>
#include <cmath>
#include <cstdlib>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

/// About one a pixel of a page: 400 buckets or more of a long case, each with two points.
constexpr std::size_t most_buckets = 800;
constexpr std::int64_t before_largest_samples = 64, after_largest_samples = 128;
constexpr std::int64_t before_edge_samples = 32, from_edge_samples = 480;
/// Places where the response is no number; the curve has its gaps beyond them too.
constexpr std::size_t most_gap_marks = 20;

enum Signals : std::size_t { stimulus, reference, response, error };

std::string counted(std::int64_t count, const char* word) {
    return std::to_string(count) + " " + word + (count == 1 ? "" : "s");
}

}  // namespace

TimeTrace::TimeTrace(const Plan& plan, const Case& the_case, int channel, int lag_samples)
    : signal_(plan.signal),
      case_(the_case),
      channel_(channel),
      lag_(lag_samples),
      rate_hz_(returned_rate_hz(plan, the_case)),
      worth_(worth_of(signal_.full_scale_unit ? Limit::In::unit : natural_unit(signal_), signal_)),
      error_worth_(worth_of(natural_unit(signal_), signal_)),
      thinned_(most_buckets),
      newest_(static_cast<std::size_t>(before_largest_samples + after_largest_samples)) {
    if (!is_driven(the_case, channel) || (the_case.shape != "step" && the_case.shape != "impulse")) return;
    const auto& words = the_case.stimulus_values.all();
    const auto at = words.find("at_samples");
    const auto* samples = at == words.end() ? nullptr : std::get_if<std::int64_t>(&at->second);
    edge_ = CaseRates(plan, the_case).returned(samples == nullptr ? 0 : *samples) + lag_samples;
}

void TimeTrace::add(const AlignedBlock& block) {
    const std::size_t count = block.values.size();
    if (count == 0) return;
    if (first_index_ < 0) first_index_ = block.first_index;
    const std::span<const double> declared = block.reference.declared;
    has_reference_ = !declared.empty();
    for (std::size_t i = 0; i < count; ++i) {
        const std::int64_t index = block.first_index + static_cast<std::int64_t>(i);
        const double expected = has_reference_ ? declared[i] : NAN;
        const Row row{block.reference.stimulus[i] / worth_, expected / worth_, block.values[i] / worth_,
                      (block.values[i] - expected) / error_worth_};
        thinned_.add(row);
        newest_[static_cast<std::size_t>(index) % newest_.size()] = row;
        next_index_ = index + 1;
        if (has_reference_) look_at_error(index, row);
        if (edge_ && index >= *edge_ - before_edge_samples && index < *edge_ + from_edge_samples) {
            if (from_edge_.rows.empty()) from_edge_.first_index = index;
            from_edge_.rows.push_back(row);
        }
    }
}

void TimeTrace::look_at_error(std::int64_t index, const Row& row) {
    // What is no number is worse than any error; of equal ones the first is kept.
    const double size = std::isfinite(row[error]) ? std::fabs(row[error]) : HUGE_VAL;
    if (size > largest_error_) {
        largest_error_ = size;
        largest_at_ = index;
    }
    if (largest_at_ >= 0 && index + 1 == largest_at_ + after_largest_samples) {
        around_largest_ = surroundings();
        kept_for_ = largest_at_;
    }
}

TimeTrace::Stretch TimeTrace::surroundings() const {
    Stretch stretch;
    stretch.first_index = std::max(first_index_, largest_at_ - before_largest_samples);
    for (std::int64_t index = stretch.first_index; index < next_index_; ++index)
        stretch.rows.push_back(newest_[static_cast<std::size_t>(index) % newest_.size()]);
    return stretch;
}

void TimeTrace::plot(CasePlots& plots) const {
    if (first_index_ < 0) return;
    plots.push_back(overview());
    // With every sample in the overview there is nothing to look at more closely.
    if (thinned_.bucket_samples() == 1) return;
    if (!from_edge_.rows.empty()) plots.push_back(plot_of(from_edge_, case_.shape + " response, sample by sample"));
    const std::int64_t edge_end = from_edge_.first_index + static_cast<std::int64_t>(from_edge_.rows.size());
    const bool is_seen = !from_edge_.rows.empty() && largest_at_ >= from_edge_.first_index && largest_at_ < edge_end;
    if (largest_at_ >= 0 && !is_seen) {
        Plot plot = plot_of(kept_for_ == largest_at_ ? around_largest_ : surroundings(),
                            "around the largest error, sample by sample");
        plot.marks.push_back({static_cast<double>(largest_at_),
                              std::isfinite(largest_error_) ? "largest error" : "not a finite number", Verdict::pass});
        plots.push_back(std::move(plot));
    }
}

Plot TimeTrace::frame(std::string title) const {
    Plot plot;
    plot.title = std::move(title);
    plot.channel = signal_.channels == 1 ? 0 : channel_;
    plot.rate_hz = rate_hz_;
    return plot;
}

Plot TimeTrace::overview() const {
    const bool is_whole = thinned_.bucket_samples() == 1;
    Plot plot = frame(is_whole && edge_ ? case_.shape + " response" : "stimulus and response");
    std::array<std::vector<double>, signals> columns;
    for (std::size_t i = 0; i < thinned_.buckets().size(); ++i) {
        const auto& bucket = thinned_.buckets()[i];
        const std::int64_t first = first_index_ + static_cast<std::int64_t>(i) * thinned_.bucket_samples();
        const std::int64_t second = first + thinned_.samples_in(i) / 2;
        plot.x.push_back(static_cast<double>(first));
        if (second > first) plot.x.push_back(static_cast<double>(second));
        for (std::size_t k = 0; k < signals; ++k) {
            const Extremes& ends = bucket[k];
            const double low = ends.is_empty() ? NAN : ends.low, high = ends.is_empty() ? NAN : ends.high;
            columns[k].push_back(ends.low_comes_first ? low : high);
            if (second > first) columns[k].push_back(ends.low_comes_first ? high : low);
        }
        if (bucket[response].has_gap && plot.marks.size() < most_gap_marks)
            plot.marks.push_back({static_cast<double>(first), "not a finite number", Verdict::undecided});
    }
    add_panels(plot, std::move(columns));
    plot.note = note_on_what_is_seen();
    return plot;
}

Plot TimeTrace::plot_of(const Stretch& stretch, std::string title) const {
    Plot plot = frame(std::move(title));
    std::array<std::vector<double>, signals> columns;
    for (std::size_t i = 0; i < stretch.rows.size(); ++i) {
        plot.x.push_back(static_cast<double>(stretch.first_index + static_cast<std::int64_t>(i)));
        for (std::size_t k = 0; k < signals; ++k) columns[k].push_back(stretch.rows[i][k]);
    }
    add_panels(plot, std::move(columns));
    return plot;
}

void TimeTrace::add_panels(Plot& plot, std::array<std::vector<double>, signals> columns) const {
    using Role = PlotCurve::Role;
    const Limit::In in = natural_unit(signal_);
    const std::string unit = unit_name(signal_.full_scale_unit ? Limit::In::unit : in, signal_);
    PlotPanel values{"signal", unit, {{Role::stimulus, "stimulus", std::move(columns[stimulus]), {}, {}}}};
    if (has_reference_)
        values.curves.push_back({Role::reference, "declared reference", std::move(columns[reference]), {}, {}});
    values.curves.push_back({Role::response, "response", std::move(columns[response]), {}, {}});
    plot.panels.push_back(std::move(values));
    if (!has_reference_) return;
    plot.panels.push_back({error_panel,
                           unit_name(in, signal_),
                           {{Role::error, "response - declared reference", std::move(columns[error]), {}, {}}}});
}

std::string TimeTrace::note_on_what_is_seen() const {
    std::string note;
    const auto say = [&](const std::string& sentence) { note += (note.empty() ? "" : " ") + sentence; };
    if (thinned_.bucket_samples() > 1) {
        say("Each pair of points is the lowest and the highest of " + counted(thinned_.bucket_samples(), "sample") +
            ".");
    }
    if (case_.start == Start::running)
        say("The first " + counted(first_index_, "sample") + " are judged by no rule and not shown.");
    if (lag_ != 0) {
        say("Stimulus and reference stand " + counted(std::abs(lag_), "sample") + (lag_ > 0 ? " later" : " earlier") +
            " than they were, where the rules compare them with the response.");
    }
    return note;
}

}  // namespace halflsb
