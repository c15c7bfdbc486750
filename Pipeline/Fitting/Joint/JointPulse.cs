using System.Globalization;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.Optimization;
using Pipeline.Apparatus;
using Pipeline.Quantities;
using Pipeline.Response;
using Pipeline.Statistics;

namespace Pipeline.Fitting;

/// <summary>An unknown emission pulse, found from runs that see the same beam in different ways.</summary>
/// <remarks>The pulse is taken as a sudden rise after a delay and an exponential fall. Delay and fall minimise the deviance of all runs together, with a
/// smooth spectrum (<see cref="SplineFamily"/>) fitted anew for each pulse: a profile likelihood, whose curvature gives their covariance. A
/// spectrum with a parameter a cell would not do: a shorter pulse leaves it more freedom to follow noise, which made the fall two standard errors
/// too short. Arrival times at one distance leave a valley; a second distance or a Doppler scan closes it.</remarks>
sealed record JointPulse(ExponentialEmission Pulse, double[,] Covariance, string? Open)
{
    /// <summary>Share of the longest pulse: below it a fall counts as sudden.</summary>
    const double Sudden = 2e-3;

    /// <summary>Errors beyond this share of the longest pulse say that the pulse is not determined.</summary>
    const double MostError = 0.25;

    /// <summary>Of each fit for one pulse.</summary>
    const double Precision = 1e-7;

    /// <summary>Arrival times at one distance.</summary>
    public static JointPulse Untold { get; } = new(new ExponentialEmission { Tail = new Measured(1) }, new double[2, 2], "arrival times at one distance do not tell an unknown emission pulse; add a second distance or a Doppler scan");

    public static JointPulse Find(JointInstrument instrument, FitWindow window, UnknownEmission unknown)
    {
        double longest = unknown.Longest.Value, first = unknown.Delay.Value;
        ExponentialEmission Of(double late, double fall) => new() { Delay = new Measured(first + Math.Abs(late) * longest), Tail = new Measured(Math.Max(Math.Abs(fall), Sudden) * longest) };
        double[]? last = null;
        SplineFamily? family = null;
        double Misfit(double late, double fall)
        {
            ResponseMatrix response = instrument.With(Of(late, fall));
            var problem = new ShapeProblem(window, response, family ??= new SplineFamily(response.Grid, [.. new Design(window, response).Blind.Select(b => !b)]));
            PoissonFit fit = (last is null ? problem.Starts() : [last]).Select(s => problem.Find(s, Precision)).MinBy(f => f.Objective)!;
            last = fit.Parameters;
            return fit.Objective;
        }
        (double Late, double Fall) start = Candidates().MinBy(c => Misfit(c.Late, c.Fall));
        var found = new NelderMeadSimplex(1e-3, 120).FindMinimum(ObjectiveFunction.Value(x => Misfit(x[0], x[1])),
            Vector<double>.Build.Dense([start.Late, start.Fall]), Vector<double>.Build.Dense([0.02, 0.02]));
        double late = Math.Abs(found.MinimizingPoint[0]), fall = Math.Max(Math.Abs(found.MinimizingPoint[1]), Sudden);
        Matrix<double>? covariance = Curvature(Misfit, late, fall) is { } h && h.Determinant() > 0 && h[0, 0] > 0 ? 2 * h.Inverse() : null;
        bool open = covariance is null || Math.Sqrt(covariance[0, 0]) > MostError || Math.Sqrt(covariance[1, 1]) > MostError;
        return new JointPulse(Of(late, fall), (covariance ?? Matrix<double>.Build.Dense(2, 2)).Multiply(longest * longest).ToArray(), open ? OpenText(covariance, longest, Of(late, fall)) : null);
    }

    static IEnumerable<(double Late, double Fall)> Candidates() =>
        from late in new[] { 0.01, 0.1, 0.3 } from fall in new[] { 0.01, 0.05, 0.15, 0.4, 0.8 } select (late, fall);

    static string OpenText(Matrix<double>? covariance, double longest, ExponentialEmission pulse) => covariance is null
        ? "even together the runs do not tell the emission pulse; add a second distance or a Doppler scan"
        : string.Create(CultureInfo.InvariantCulture, $"even together the runs leave the emission pulse open: delay {1e3 * pulse.Delay.Value:G3} ± {1e3 * longest * Math.Sqrt(covariance[0, 0]):G2} ms, fall {1e3 * pulse.Tail.Value:G3} ± {1e3 * longest * Math.Sqrt(covariance[1, 1]):G2} ms; add a second distance or a Doppler scan");

    /// <summary>Second derivatives by differences over steps that raise the misfit by about one; at the end of a range from one side.</summary>
    static Matrix<double>? Curvature(Func<double, double, double> misfit, double late, double fall)
    {
        double least = misfit(late, fall);
        double stepLate = Step(h => misfit(late + h, fall) - least), stepFall = Step(h => misfit(late, fall + h) - least);
        double Second(Func<double, double> at, double step, bool bothSides) => (bothSides ? at(step) + at(-step) - 2 * least : 2 * (at(step) - least)) / (step * step);
        double a = Second(h => misfit(late + h, fall), stepLate, late > stepLate), b = Second(h => misfit(late, fall + h), stepFall, fall > stepFall + Sudden);
        bool inside = late > stepLate && fall > stepFall + Sudden;
        double mixed = inside ? (misfit(late + stepLate, fall + stepFall) + misfit(late - stepLate, fall - stepFall) - misfit(late + stepLate, fall - stepFall) - misfit(late - stepLate, fall + stepFall)) / (4 * stepLate * stepFall)
            : (misfit(late + stepLate, fall + stepFall) - least - 0.5 * a * stepLate * stepLate - 0.5 * b * stepFall * stepFall) / (stepLate * stepFall);
        return double.IsFinite(a + b + mixed) ? Matrix<double>.Build.DenseOfArray(new[,] { { a, mixed }, { mixed, b } }) : null;
    }

    static double Step(Func<double, double> rise)
    {
        double step = 0.01;
        for (int k = 0; k < 6; k++)
        {
            double up = rise(step);
            if (up is > 0.5 and < 3) break;
            step = Math.Clamp(step * Math.Sqrt(1 / Math.Max(up, 0.02)), 1e-5, 0.5);
        }
        return step;
    }

    /// <summary>Pulses one standard deviation away along both axes of the covariance.</summary>
    public IEnumerable<Func<double, EmissionProfile>> Axes()
    {
        var axes = Matrix<double>.Build.DenseOfArray(Covariance).Evd(Symmetricity.Symmetric);
        for (int k = 0; k < 2; k++)
        {
            Vector<double> along = axes.EigenVectors.Column(k) * Math.Sqrt(Math.Max(axes.EigenValues[k].Real, 0));
            yield return deviations => Pulse with
            {
                Delay = new Measured(Pulse.Delay.Value + deviations * along[0]), Tail = new Measured(Math.Max(Pulse.Tail.Value + deviations * along[1], 1e-7)),
            };
        }
    }
}
