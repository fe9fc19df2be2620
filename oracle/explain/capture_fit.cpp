#include "oracle/explain/capture_fit.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>
#include <set>

#include "oracle/explain/board_model.hpp"

namespace halflsb {
namespace {

/// Short first: most hypotheses are given up there.
constexpr std::size_t first_piece = 64, largest_piece = 4096;
/// One in so many.
constexpr std::size_t most_missing_share = 64;
/// Enough for an error to show its size, few enough for thousands of boards.
constexpr std::size_t samples_of_miss = 512;
constexpr double least_square_lsb2 = 0x1p-32;

struct OneCase {
    std::int64_t compared = 0, equal = 0, wrong_index = -1;
};

OneCase run_case(BoardModel& model, const ChannelCapture& capture) {
    OneCase result;
    model.begin_case(capture.start, capture.start_samples);
    const std::int64_t first = capture.start == Start::running ? capture.start_samples : 0;
    std::vector<Code> out;
    std::size_t at = 0, compared = 0, piece = first_piece;
    while (at < capture.sent.size()) {
        const std::size_t count = std::min(piece, capture.sent.size() - at);
        model.process(std::span(capture.sent).subspan(at, count), out);
        at += count;
        piece = std::min(2 * piece, largest_piece);
        for (; compared < std::min(out.size(), capture.response.size()); ++compared) {
            if (static_cast<std::int64_t>(compared) < first) continue;
            ++result.compared;
            if (out[compared] == capture.response[compared]) {
                ++result.equal;
                continue;
            }
            result.wrong_index = static_cast<std::int64_t>(compared);
            return result;
        }
    }
    // A board that loses samples may lack a few at the end; one that returns nothing explains nothing.
    const std::size_t missing = capture.response.size() - compared;
    if (missing * most_missing_share > capture.response.size())
        result.wrong_index = static_cast<std::int64_t>(compared);
    return result;
}

}  // namespace

CaptureSet::CaptureSet(const Signal& signal, std::vector<ChannelCapture> captures)
    : signal_(signal), captures_(std::move(captures)), order_(captures_.size()) {
    std::iota(order_.begin(), order_.end(), std::size_t{0});
    for (const ChannelCapture& capture : captures_) {
        is_chained_ = is_chained_ || capture.start == Start::running;
    }
}

std::int64_t CaptureSet::samples() const {
    std::int64_t all = 0;
    for (const ChannelCapture& capture : captures_) all += std::ssize(capture.response);
    return all;
}

CaptureFit CaptureSet::until_first_wrong(const BoardDescription& board) const {
    CaptureFit fit;
    const auto model = BoardModel::make(board, signal_);
    if (model == nullptr) return fit;
    fit.could_run = true;
    const bool in_order = is_chained_ || board.reset != ResetKind::whole;
    for (std::size_t place = 0; place < captures_.size(); ++place) {
        const std::size_t index = in_order ? place : order_[place];
        const OneCase one = run_case(*model, captures_[index]);
        fit.compared += one.compared;
        fit.equal += one.equal;
        if (one.wrong_index < 0) continue;
        fit.wrong_case = static_cast<int>(index);
        fit.wrong_index = one.wrong_index;
        return fit;
    }
    return fit;
}

CaptureFit CaptureSet::until_first_wrong_in(std::size_t index, const BoardDescription& board) const {
    CaptureFit fit;
    const auto model = BoardModel::make(board, signal_);
    if (model == nullptr) return fit;
    const OneCase one = run_case(*model, captures_[index]);
    fit.could_run = true;
    fit.compared = one.compared;
    fit.equal = one.equal;
    if (one.wrong_index >= 0) fit.wrong_case = static_cast<int>(index);
    fit.wrong_index = one.wrong_index;
    return fit;
}

std::optional<std::size_t> CaptureSet::liveliest() const {
    if (is_chained_) return std::nullopt;
    std::optional<std::size_t> best;
    std::size_t most = 0;
    for (std::size_t i = 0; i < captures_.size(); ++i) {
        const auto& sent = captures_[i].sent;
        std::vector<std::int64_t> steps;
        for (std::size_t n = 1; n < std::min<std::size_t>(sent.size(), 2048); ++n)
            steps.push_back(std::int64_t{sent[n]} - sent[n - 1]);
        std::sort(steps.begin(), steps.end());
        const auto different = static_cast<std::size_t>(std::unique(steps.begin(), steps.end()) - steps.begin());
        if (different <= most) continue;
        most = different;
        best = i;
    }
    return best;
}

void CaptureSet::order_by(const BoardDescription& declared) {
    const auto model = BoardModel::make(declared, signal_);
    if (model == nullptr || is_chained_) return;
    std::vector<std::int64_t> first_wrong(captures_.size());
    for (std::size_t i = 0; i < captures_.size(); ++i) {
        const OneCase one = run_case(*model, captures_[i]);
        // Cases without a difference come last, the short ones first.
        first_wrong[i] = one.wrong_index >= 0 ? one.wrong_index : (std::int64_t{1} << 40) + one.compared;
    }
    std::stable_sort(order_.begin(), order_.end(),
                     [&](std::size_t a, std::size_t b) { return first_wrong[a] < first_wrong[b]; });
}

void CaptureSet::order_by_variety() {
    if (is_chained_) return;
    std::vector<std::size_t> different(captures_.size());
    for (std::size_t i = 0; i < captures_.size(); ++i) {
        const auto& response = captures_[i].response;
        const auto end = response.begin() + static_cast<std::ptrdiff_t>(std::min(response.size(), samples_of_miss));
        different[i] = std::set<Code>(response.begin(), end).size();
    }
    std::stable_sort(order_.begin(), order_.end(),
                     [&](std::size_t a, std::size_t b) { return different[a] > different[b]; });
}

double CaptureSet::miss_octaves(const BoardDescription& board) const { return miss_of(board, captures_.size()); }

double CaptureSet::first_miss_octaves(const BoardDescription& board) const { return miss_of(board, 1); }

double CaptureSet::miss_of(const BoardDescription& board, std::size_t cases) const {
    const auto model = BoardModel::make(board, signal_);
    if (model == nullptr) return std::numeric_limits<double>::infinity();
    double octaves = 0.0;
    std::vector<Code> out;
    for (std::size_t place = 0; place < std::min(cases, captures_.size()); ++place) {
        // All of them in the order in which they were streamed: a reset may leave something.
        const ChannelCapture& capture = captures_[cases < captures_.size() ? order_[place] : place];
        out.clear();
        model->begin_case(capture.start, capture.start_samples);
        model->process(std::span(capture.sent).first(std::min(capture.sent.size(), samples_of_miss)), out);
        const std::size_t count = std::min(out.size(), capture.response.size());
        double squares = 0.0;
        for (std::size_t n = 0; n < count; ++n) {
            const double error = static_cast<double>(out[n]) - static_cast<double>(capture.response[n]);
            squares += error * error;
        }
        if (count > 0) squares /= static_cast<double>(count);
        octaves += 0.5 * std::log2(squares + least_square_lsb2);
    }
    return octaves;
}

bool CaptureSet::is_exact_start(double miss) const {
    return miss <= 0.5 * std::log2(least_square_lsb2) * static_cast<double>(captures_.size());
}

}  // namespace halflsb
