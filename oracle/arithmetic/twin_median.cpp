// The median, in whole numbers and in float32.
#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/float_ports.hpp"
#include "oracle/arithmetic/history.hpp"
#include "oracle/arithmetic/stage_twin.hpp"

namespace halflsb {

namespace {

/// The last samples, as they came and in rising order.
template <class Value>
class Window {
public:
    explicit Window(std::size_t points) : past_(points), sorted_(points, Value{}) {}

    void reset() {
        past_.reset();
        std::fill(sorted_.begin(), sorted_.end(), Value{});
    }

    /// Neither the oldest nor the newest is a NaN: that is the caller's to keep out.
    void push(Value newest) {
        const Value oldest = past_.ago(past_.depth());
        past_.push(newest);
        const auto gap = std::lower_bound(sorted_.begin(), sorted_.end(), oldest);
        const auto place = std::lower_bound(sorted_.begin(), sorted_.end(), newest);
        // Those between the two move up into the gap, or down.
        if (place <= gap) {
            std::move_backward(place, gap, gap + 1);
            *place = newest;
        } else {
            std::move(gap + 1, place, gap);
            *(place - 1) = newest;
        }
    }

    bool is_even() const { return sorted_.size() % 2 == 0; }
    Value lower_middle() const { return sorted_[(sorted_.size() - 1) / 2]; }
    Value upper_middle() const { return sorted_[sorted_.size() / 2]; }

    std::size_t kept() const { return past_.depth() - 1; }
    /// What the next output depends on: the oldest has gone by then.
    template <class Put>
    void for_each_kept(Put put) const {
        past_.for_each_newest_first(kept(), put);
    }
    void set_kept(std::vector<Value> newest_first) {
        // The oldest matters no more; a number that is there already keeps NaN out.
        newest_first.push_back(Value{});
        past_.set(newest_first);
        sorted_ = std::move(newest_first);
        std::sort(sorted_.begin(), sorted_.end());
    }

private:
    History<Value> past_;
    std::vector<Value> sorted_;
};

class MedianTwin final : public StageTwin {
public:
    MedianTwin(const DescribedStage& stage, std::size_t points, const std::string& name)
        : in_(stage.in.word),
          window_(points),
          halved_{stage.out.word.fraction_bits - stage.in.word.fraction_bits - 1, stage.rounding,
                  stage.out.word.overflow},
          output_(name + "output", stage.out.word) {}

    void reset() override {
        window_.reset();
        output_.reset();
    }

    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        for (std::size_t i = 0; i < in.size(); ++i) {
            window_.push(in[i]);
            // The middle one is the mean of itself.
            const Int128 twice = Int128{window_.lower_middle()} + window_.upper_middle();
            out[i] = static_cast<std::int64_t>(output_.hold(halved_(twice)));
        }
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        window_.for_each_kept([&](std::int64_t word) { state.push_back(word); });
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        if (state.size() < window_.kept()) return false;
        const auto words = state.first(window_.kept());
        window_.set_kept({words.begin(), words.end()});
        state = state.subspan(window_.kept());
        return std::all_of(words.begin(), words.end(), [&](std::int64_t word) {
            return std::fabs(static_cast<double>(word)) <= std::ldexp(1.0, in_.bits - 1);
        });
    }

    void append_reaches(std::vector<NodeReach>& reaches) const override { reaches.push_back(output_.reach()); }

private:
    Word in_;
    Window<std::int64_t> window_;
    Shift halved_;
    Register<Int128> output_;
};

/// A NaN in the window makes the output NaN; the window holds 0 in its place.
class FloatMedianTwin final : public StageTwin {
public:
    FloatMedianTwin(const DescribedStage& stage, std::size_t points, const std::string& name)
        : input_(stage.in), window_(points), nans_(points), output_(stage.out, stage.rounding, name + "output") {}

    void reset() override {
        window_.reset();
        nans_.reset();
        count_ = 0;
        output_.reset();
    }

    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        for (std::size_t i = 0; i < in.size(); ++i) {
            const float x = input_(in[i]);
            const bool is_nan = std::isnan(x);
            count_ -= nans_.ago(nans_.depth()) ? 1 : 0;
            count_ += is_nan ? 1 : 0;
            nans_.push(is_nan ? 1 : 0);
            window_.push(is_nan ? 0.0f : x);
            out[i] = output_(count_ > 0 ? NAN : middle());
        }
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        std::vector<char> nan;
        nans_.for_each_newest_first(window_.kept(), [&](char each) { nan.push_back(each); });
        std::size_t k = 0;
        window_.for_each_kept([&](float value) { state.push_back(bits_of_float(nan[k++] != 0 ? NAN : value)); });
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        if (state.size() < window_.kept()) return false;
        std::vector<float> values;
        std::vector<char> nan;
        for (const std::int64_t bits : state.first(window_.kept())) {
            if (!is_float_bits(bits)) return false;
            const float value = float_of_bits(bits);
            nan.push_back(std::isnan(value) ? 1 : 0);
            values.push_back(std::isnan(value) ? 0.0f : value);
        }
        window_.set_kept(std::move(values));
        nans_.set(nan);
        count_ = std::count(nan.begin(), nan.end(), 1);
        state = state.subspan(window_.kept());
        return true;
    }

    void append_reaches(std::vector<NodeReach>& reaches) const override { reaches.push_back(output_.reach()); }

private:
    float middle() const {
        if (!window_.is_even()) return window_.lower_middle();
        return (window_.lower_middle() + window_.upper_middle()) / 2.0f;
    }

    FloatInput input_;
    Window<float> window_;
    History<char> nans_;
    std::ptrdiff_t count_ = 0;
    FloatOutput output_;
};

}  // namespace

std::unique_ptr<StageTwin> make_median_twin(const DescribedStage& stage, const std::string& name) {
    const auto points = static_cast<std::size_t>(std::get<Median>(stage.stage.design).points);
    if (stage.number == NumberKind::float32) return std::make_unique<FloatMedianTwin>(stage, points, name);
    return std::make_unique<MedianTwin>(stage, points, name);
}

}  // namespace halflsb
