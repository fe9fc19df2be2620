#include "oracle/explain/symptoms.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <vector>

#include "oracle/explain/board_model.hpp"

namespace halflsb {
namespace {

constexpr std::int64_t most_lag = 16, most_block = 4096;
/// Fewer tell no pattern.
constexpr std::size_t fewest_differences = 8, most_differences = 4096;

/// Sums of one stretch of numbers.
struct Mean {
    double sum = 0.0;
    std::int64_t count = 0;
    void add(double number) {
        sum += number;
        ++count;
    }
    std::optional<double> value() const {
        return count == 0 ? std::nullopt : std::optional(sum / static_cast<double>(count));
    }
};

class Gathering {
public:
    explicit Gathering(const SampleFormat& output) : zero_(zero_code(output)) {}

    void add_case(int number, const std::vector<Code>& declared, const ChannelCapture& capture) {
        const auto first = static_cast<std::size_t>(
            capture.start == Start::running ? std::max<std::int64_t>(0, capture.start_samples) : 0);
        const std::size_t count = std::min(declared.size(), capture.response.size());
        std::int64_t held = 1, first_wrong = -1;
        bool moves = false;
        for (std::size_t n = first; n < count; ++n) {
            const double error = static_cast<double>(capture.response[n]) - static_cast<double>(declared[n]);
            add(number, static_cast<std::int64_t>(n), error, declared[n]);
            bits_ |= static_cast<std::uint64_t>(capture.response[n] - zero_);
            declared_bits_ |= static_cast<std::uint64_t>(declared[n] - zero_);
            if (error != 0.0 && first_wrong < 0) first_wrong = static_cast<std::int64_t>(n);
            if (n == first) continue;
            const bool is_equal = capture.response[n] == capture.response[n - 1];
            held = is_equal ? held + 1 : 1;
            moves = is_equal && (moves || declared[n] != declared[n - 1]);
            if (moves) made_.longest_held_samples = std::max(made_.longest_held_samples, held);
        }
        if (first_wrong >= 0 && !has_lag_) find_lag(declared, capture, first_wrong);
    }

    Symptoms finish() {
        const auto count = static_cast<double>(std::max<std::int64_t>(1, made_.samples));
        made_.mean_lsb = sum_ / count;
        made_.rms_lsb = std::sqrt(squares_ / count);
        made_.mean_above_lsb = above_.value();
        made_.mean_below_lsb = below_.value();
        made_.zero_bits = bits_ == 0 ? 0 : std::countr_zero(bits_);
        made_.declared_zero_bits = declared_bits_ == 0 ? 0 : std::countr_zero(declared_bits_);
        find_block();
        return made_;
    }

private:
    void add(int number, std::int64_t index, double error, Code declared) {
        ++made_.samples;
        sum_ += error;
        squares_ += error * error;
        if (declared != zero_) (declared > zero_ ? above_ : below_).add(error);
        if (error == 0.0) return;
        ++made_.differing;
        if (differing_.size() < most_differences) differing_.push_back(index);
        if (std::fabs(error) <= std::fabs(made_.largest_lsb)) return;
        made_.largest_lsb = error;
        made_.largest_case = number;
        made_.largest_index = index;
    }

    void find_lag(const std::vector<Code>& declared, const ChannelCapture& capture, std::int64_t from) {
        has_lag_ = true;
        double least = -1.0;
        for (std::int64_t lag = -most_lag; lag <= most_lag; ++lag) {
            double squares = 0.0;
            std::int64_t count = 0, equal = 0;
            for (std::int64_t n = from; n < std::ssize(capture.response); ++n) {
                const std::int64_t at = n - lag;
                if (at < 0 || at >= std::ssize(declared)) continue;
                const double error = static_cast<double>(capture.response[static_cast<std::size_t>(n)]) -
                                     static_cast<double>(declared[static_cast<std::size_t>(at)]);
                squares += error * error;
                equal += error == 0.0 ? 1 : 0;
                ++count;
            }
            if (count == 0) continue;
            const double mean = squares / static_cast<double>(count);
            // Of equals the smaller lag.
            const bool is_less =
                least < 0.0 || mean < least || (mean == least && std::abs(lag) < std::abs(made_.lag_samples));
            if (!is_less) continue;
            least = mean;
            made_.lag_samples = lag;
            made_.equal_at_lag_percent = 100.0 * static_cast<double>(equal) / static_cast<double>(count);
        }
    }

    void find_block() {
        if (differing_.size() < fewest_differences || 2 * made_.differing > made_.samples) return;
        for (std::int64_t block = 2; block <= most_block; ++block) {
            std::vector<std::size_t> at(static_cast<std::size_t>(block), 0);
            for (const std::int64_t index : differing_) ++at[static_cast<std::size_t>(index % block)];
            const auto most = std::max_element(at.begin(), at.end());
            if (*most * 10 <= differing_.size() * 9) continue;
            made_.block_samples = block;
            made_.block_place = most - at.begin();  // of a multiple the first is the block itself
        }
    }

    Code zero_;
    Symptoms made_;
    double sum_ = 0.0, squares_ = 0.0;
    Mean above_, below_;
    std::uint64_t bits_ = 0, declared_bits_ = 0;
    bool has_lag_ = false;
    std::vector<std::int64_t> differing_;
};

}  // namespace

std::optional<Symptoms> symptoms_of(const BoardDescription& declared, const CaptureSet& captures) {
    const auto model = BoardModel::make(declared, captures.signal());
    if (model == nullptr || !captures.signal().output.has_lsb()) return std::nullopt;
    Gathering gathering(captures.signal().output);
    std::vector<Code> out;
    int number = 0;
    for (const ChannelCapture& capture : captures.captures()) {
        out.clear();
        model->begin_case(capture.start, capture.start_samples);
        model->process(capture.sent, out);
        gathering.add_case(number++, out, capture);
    }
    return gathering.finish();
}

}  // namespace halflsb
