#include "oracle/explain/linear_fit.hpp"

#include <Eigen/Dense>
#include <algorithm>
#include <cmath>

#include "oracle/filters/rates.hpp"

namespace halflsb {
namespace {

constexpr std::int64_t most_equations = 32768;
constexpr std::size_t equations_per_coefficient = 8;
constexpr std::size_t most_feed_forward = 160, most_feedback = 8;
/// Columns are scaled to one; below this share of them nothing but rounding tells two apart.
constexpr double least_pivot = 1e-13;

using Matrix = Eigen::MatrixXd;
using Vector = Eigen::VectorXd;

/// Sums of products of an equation's columns, and of these with the response.
class Equations {
public:
    Equations(const Signal& signal, std::size_t feed_forward, std::size_t feedback)
        : signal_(signal),
          forward_(feed_forward),
          back_(feedback),
          columns_(static_cast<Eigen::Index>(feed_forward + feedback + 1)),
          row_(columns_),
          squares_(Matrix::Zero(columns_, columns_)),
          products_(Vector::Zero(columns_)),
          lowest_(code_of(signal.output, lowest_value(signal.output), Rounding::floor)),
          highest_(code_of(signal.output, highest_value(signal.output), Rounding::floor)) {}

    void add_case(const ChannelCapture& capture, std::int64_t most) {
        const std::size_t count = std::min(capture.sent.size(), capture.response.size());
        const std::size_t memory = std::max(forward_, back_ + 1);
        const auto first = static_cast<std::size_t>(std::max<std::int64_t>(
            capture.start == Start::running ? capture.start_samples : 0, static_cast<std::int64_t>(memory)));
        std::size_t clean = 0;  // samples since one at a rail
        for (std::size_t n = 0; n < count && most > 0; ++n) {
            clean = is_at_rail(capture.response[n]) ? 0 : clean + 1;
            if (n < first || clean <= back_) continue;
            fill(capture, n);
            // What stands still says nothing beyond its first samples.
            if (is_still(capture, n)) continue;
            add(in_lsb(capture.response[n]));
            --most;
        }
    }

    std::int64_t count() const { return count_; }

    std::optional<LinearFit> solve() const {
        if (count_ < static_cast<std::int64_t>(equations_per_coefficient) * columns_) return std::nullopt;
        const Vector scale = squares_.diagonal().cwiseSqrt();
        if (scale.minCoeff() <= 0.0) return std::nullopt;
        const Vector inverse = scale.cwiseInverse();
        const Matrix scaled = inverse.asDiagonal() * squares_ * inverse.asDiagonal();
        const Eigen::LDLT<Matrix> factors(scaled);
        if (factors.info() != Eigen::Success || factors.vectorD().minCoeff() < least_pivot) return std::nullopt;
        const Vector solution = inverse.cwiseProduct(factors.solve(inverse.cwiseProduct(products_)));
        if (!solution.allFinite()) return std::nullopt;
        return as_fit(solution);
    }

private:
    bool is_at_rail(Code code) const { return code == lowest_ || code == highest_; }
    double in_lsb(Code code) const { return value_of(signal_.output, code) / lsb_value(signal_.output); }

    bool is_still(const ChannelCapture& capture, std::size_t n) const {
        return std::all_of(capture.sent.begin() + static_cast<std::ptrdiff_t>(n + 1 - forward_),
                           capture.sent.begin() + static_cast<std::ptrdiff_t>(n + 1),
                           [&](Code code) { return code == capture.sent[n]; }) &&
               capture.response[n] == capture.response[n - 1];
    }

    /// Inputs as the output's LSB of what they are worth there at gain 1.
    void fill(const ChannelCapture& capture, std::size_t n) {
        const double worth = signal_.output_per_input / lsb_value(signal_.output);
        Eigen::Index at = 0;
        for (std::size_t k = 0; k < forward_; ++k) row_[at++] = worth * value_of(signal_.input, capture.sent[n - k]);
        for (std::size_t k = 1; k <= back_; ++k) row_[at++] = -in_lsb(capture.response[n - k]);
        row_[at] = 1.0;
    }

    void add(double response) {
        squares_.selfadjointView<Eigen::Lower>().rankUpdate(row_);
        products_ += response * row_;
        responses_ += response * response;
        ++count_;
    }

    LinearFit as_fit(const Vector& solution) const {
        LinearFit fit;
        fit.samples = count_;
        for (std::size_t k = 0; k < forward_; ++k) fit.b.push_back(solution[static_cast<Eigen::Index>(k)]);
        fit.a.push_back(1.0);
        for (std::size_t k = 0; k < back_; ++k) fit.a.push_back(solution[static_cast<Eigen::Index>(forward_ + k)]);
        fit.offset_lsb = solution[columns_ - 1];
        const Matrix whole = squares_.selfadjointView<Eigen::Lower>();
        const double left = responses_ - 2.0 * solution.dot(products_) + solution.dot(whole * solution);
        fit.residual_lsb = std::sqrt(std::max(0.0, left) / static_cast<double>(count_));
        return fit;
    }

    const Signal& signal_;
    std::size_t forward_, back_;
    Eigen::Index columns_;
    Vector row_;
    Matrix squares_;
    Vector products_;
    double responses_ = 0.0;
    std::int64_t count_ = 0;
    Code lowest_, highest_;
};

/// Coefficients in a direct form.
struct Orders {
    std::optional<LinearOrder> operator()(const MovingAverage& average) const {
        return LinearOrder{static_cast<std::size_t>(average.points), 0};
    }
    std::optional<LinearOrder> operator()(const Fir& fir) const { return LinearOrder{fir.taps.size(), 0}; }
    std::optional<LinearOrder> operator()(const BiquadCascade& cascade) const {
        return LinearOrder{2 * cascade.sections.size() + 1, 2 * cascade.sections.size()};
    }
    std::optional<LinearOrder> operator()(const Recursion& recursion) const {
        return LinearOrder{recursion.b.size(), recursion.a.size() - 1};
    }
    template <class Other>
    std::optional<LinearOrder> operator()(const Other&) const {
        return std::nullopt;
    }
};

}  // namespace

std::optional<LinearOrder> linear_order(const FilterChain& chain) {
    LinearOrder order{1, 0};
    for (const FilterStage& stage : chain) {
        const auto one = std::visit(Orders{}, stage.design);
        if (!one) return std::nullopt;
        order.feed_forward += one->feed_forward - 1;
        order.feedback += one->feedback;
    }
    if (order.feed_forward > most_feed_forward || order.feedback > most_feedback) return std::nullopt;
    return order;
}

std::optional<LinearFit> fit_linear(const CaptureSet& captures, std::size_t feed_forward, std::size_t feedback) {
    const Signal& signal = captures.signal();
    if (!signal.input.has_lsb() || !signal.output.has_lsb() || feed_forward == 0) return std::nullopt;
    Equations equations(signal, feed_forward, feedback);
    std::int64_t left = std::ssize(captures.captures());
    for (const ChannelCapture& capture : captures.captures()) {
        // What earlier cases leave of the share goes to the later ones.
        equations.add_case(capture, (most_equations - equations.count()) / left--);
    }
    return equations.solve();
}

}  // namespace halflsb
