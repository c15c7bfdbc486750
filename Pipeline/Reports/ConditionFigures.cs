using Pipeline.Analysis;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Reduction;

namespace Pipeline.Reports;

/// <summary>The figures of one condition.</summary>
static class ConditionFigures
{
    /// <summary>Signal against arrival time with fit and prediction, and residuals of the fit below it on the same times.</summary>
    public static Markup Signal(ConditionOutcome c)
    {
        NetSignal signal = c.Fit.Signal;
        if (signal.Axis.Points.Count > 0) return ScanFigures.Signal(c);
        SignalAxis axis = signal.Axis;
        VelocitySpectrum? spectrum = c.Fit.Spectra.Count > 0 ? c.Fit.Spectra[0] : null;
        double[] times = PerBin(axis, i => 1e3 * axis.CentreSeconds(i)), width = PerBin(axis, i => 1e3 * axis.WidthSeconds(i));
        double[] net = Rate(signal.NetPerShot(), width), error = Rate(signal.NetError(), width);
        double[]? fit = spectrum is null ? null : Rate(spectrum.Refolded, width), predicted = c.Prediction is { } p ? Rate(p.Signal, width) : null;
        (double Low, double High) range = Interesting(axis, fit ?? predicted, times, width);
        bool[] shown = [.. times.Select(t => t >= range.Low && t <= range.High)];
        var values = net.Where((_, i) => shown[i]).Concat((fit ?? []).Where((_, i) => shown[i])).Concat((predicted ?? []).Where((_, i) => shown[i]));
        SvgFigure figure = new SvgFigure($"Signal of condition {c.Name} against arrival time", range, "time after trigger (ms)")
            .Panel(270, Axis.Around(values), "counts per shot and ms", last: fit is null && predicted is null).Points(times, net, error);
        if (predicted is not null)
        {
            double[] noise = Rate([.. c.Prediction!.Variance.Select(Math.Sqrt)], width), edges = [.. axis.EdgesInSeconds().Select(e => 1e3 * e)];
            figure.Band("simulated", edges, [.. predicted.Zip(noise, (p, n) => p - n)], [.. predicted.Zip(noise, (p, n) => p + n)]).Line("prediction", times, predicted);
        }
        if (fit is not null) figure.Line("fit", times, fit);
        if ((fit ?? predicted) is { } model)
        {
            double[] pulls = [.. net.Select((n, i) => (n - model[i]) / error[i])];
            double most = Math.Clamp(pulls.Where((x, i) => shown[i] && double.IsFinite(x)).Select(Math.Abs).DefaultIfEmpty(3).Max() * 1.08, 3.5, 12);
            figure.Panel(110, (-most, most), "residual (σ)", last: true).Points(times, [.. pulls.Select(x => Math.Clamp(x, -most, most))], null);
        }
        return figure.Draw();
    }

    /// <summary>dN/dv with its bands, the other estimator, and the prediction as this estimator would have seen it.</summary>
    public static Markup Spectrum(ConditionOutcome c, double capture)
    {
        VelocitySpectrum s = c.Fit.Spectra[0];
        double[] edges = s.Grid.Edges(), density = Density(s, s.Molecules), statistical = Density(s, s.Statistical);
        double[] total = [.. statistical.Zip(Density(s, s.Systematic), double.Hypot)];
        double[]? predicted = c.Prediction is { } p && s.Resolution is { } r ? Density(s, Smeared(r, p.Spectrum)) : null;
        double[] high = [.. density.Zip(total, (d, t) => d + t)];
        SvgFigure figure = new SvgFigure($"Velocity spectrum of condition {c.Name}", (s.Grid.From, s.Grid.To), "velocity (m/s)")
            .Panel(300, Axis.Around([0, .. high, .. predicted ?? []], 0.05), "molecules per shot and m/s", last: true)
            .Band("outer", edges, [.. density.Zip(total, (d, t) => d - t)], high)
            .Band("inner", edges, [.. density.Zip(statistical, (d, t) => d - t)], [.. density.Zip(statistical, (d, t) => d + t)])
            .Steps("fit", edges, density);
        foreach (VelocitySpectrum other in c.Fit.Spectra.Skip(1)) figure.Steps("other", edges, Density(other, other.Molecules));
        if (predicted is not null) figure.Steps("prediction", edges, predicted);
        return figure.Mark(capture, "capture").Draw();
    }

    /// <summary>What the marks mean; a word and a sample for each.</summary>
    public static Markup Key(params (string Style, string Word)[] entries) => Html.Of(
        $"<ul class=\"key\">{entries.Select(e => Html.Of($"<li>{Sample(e.Style)}{e.Word}</li>"))}</ul>");

    static Markup Sample(string style) => new(style switch
    {
        "point" => "<svg viewBox=\"0 0 34 12\" aria-hidden=\"true\"><line class=\"error\" x1=\"17\" x2=\"17\" y1=\"0\" y2=\"12\"/><circle class=\"point\" cx=\"17\" cy=\"6\" r=\"2.6\"/></svg>",
        "inner" or "outer" or "simulated" => $"<svg viewBox=\"0 0 34 12\" aria-hidden=\"true\"><rect class=\"{style}\" width=\"34\" height=\"12\"/></svg>",
        _ => $"<svg viewBox=\"0 0 34 12\" aria-hidden=\"true\"><path class=\"{style}\" d=\"M0 6H34\"/></svg>",
    });

    /// <summary>Times that hold nearly all of the model's signal, with room around it; all times where there is no model.</summary>
    static (double, double) Interesting(SignalAxis axis, double[]? model, double[] times, double[] width)
    {
        double last = 1e3 * axis.EdgeSeconds(axis.Bins);
        if (model is null) return (0, last);
        double[] weight = [.. model.Zip(width, (m, w) => double.IsFinite(m) ? Math.Max(0, m * w) : 0)];
        double all = weight.Sum(), sum = 0;
        (double low, double high) = (times[0], last);
        for (int i = 0; i < weight.Length; i++)
        {
            sum += weight[i];
            if (sum < 0.001 * all) low = times[i];
            if (sum < 0.985 * all) high = times[i];
        }
        double room = 0.25 * (high - low);
        return (Math.Max(0, low - room), Math.Min(last, high + 2 * room));
    }

    static double[] Smeared(double[][] resolution, double[] truth) => [.. resolution.Select(row => row.Zip(truth, (a, t) => a * t).Sum())];
    static double[] Density(VelocitySpectrum s, double[] molecules) => [.. molecules.Select(m => m / s.Grid.Step)];
    static double[] Rate(double[] counts, double[] width) => [.. counts.Zip(width, (c, w) => c / w)];
    static double[] PerBin(SignalAxis axis, Func<int, double> of) => [.. Enumerable.Range(0, axis.Bins).Select(of)];
}
