// Runs measures for measure_test.py. A case is: what (0 error, 1 lag, 2 discrimination, 3 Welch
// response, 4 tone response), a list of its parameters, and two lists of samples.
#include "oracle/measure/error.hpp"
#include "oracle/measure/lag.hpp"
#include "oracle/measure/response.hpp"
#include "tests/reference/binary_cases.hpp"

using namespace halflsb;
using namespace halflsb::reference;

namespace {

// largest, its index, rms, bias, snr (0 when there is none), first beyond, beyond
void answer_error(double limit, std::span<const double> reference, std::span<const double> response) {
    ErrorMeasure measure(limit);
    measure.add(reference, response);
    const ErrorFigures f = measure.value();
    write_numbers({f.largest, static_cast<double>(f.largest_index), f.rms, f.bias, f.snr_db.value_or(0.0),
                   static_cast<double>(f.first_beyond), static_cast<double>(f.beyond)});
}

// samples, best lag, R(-window) .. R(window)
void answer_lag(int window, std::span<const double> reference, std::span<const double> response) {
    LagMeasure measure(window);
    measure.add(reference, response);
    const LagFigures f = measure.value();
    write_numbers({static_cast<double>(f.samples), static_cast<double>(f.best_lag)});
    write_numbers(f.residual);
}

void answer_discrimination(int window, std::span<const double> reference) {
    LagDiscrimination measure(window);
    measure.add(reference);
    write_numbers({measure.smallest(), static_cast<double>(measure.hardest_lag())});
}

// for each point: frequency, real and imaginary part, stimulus power, averages
void answer_response(ResponseMeasure& measure, std::span<const double> stimulus, std::span<const double> error) {
    measure.add(stimulus, error);
    measure.finish();
    for (const ResponsePoint& p : measure.value()) {
        write_numbers({p.cycles_per_sample, p.difference.real(), p.difference.imag(), p.stimulus_power,
                       static_cast<double>(p.averages)});
    }
}

}  // namespace

int main() {
    for (double what = 0.0; read_number(what);) {
        const std::vector<double> parameters = numbers(), a = numbers(), b = numbers();
        switch (static_cast<int>(what)) {
            case 0:
                answer_error(parameters.at(0), a, b);
                break;
            case 1:
                answer_lag(static_cast<int>(parameters.at(0)), a, b);
                break;
            case 2:
                answer_discrimination(static_cast<int>(parameters.at(0)), a);
                break;
            case 3:
                answer_response(*make_welch_response(static_cast<std::size_t>(parameters.at(0))), a, b);
                break;
            case 4:
                answer_response(*make_tone_response(parameters, static_cast<std::int64_t>(a.size())), a, b);
                break;
            default:
                return 1;
        }
    }
}
