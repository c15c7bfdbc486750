using Pipeline.Analysis;
using Pipeline.Backgrounds;

namespace Pipeline.Reports;

/// <summary>Figures of laser scans.</summary>
static class ScanFigures
{
    /// <summary>Signal against the laser's reading, arrival times summed, with fit and prediction, and residuals of the fit below it.</summary>
    public static Markup Signal(ConditionOutcome c)
    {
        NetSignal signal = c.Fit.Signal;
        int times = signal.Axis.TimeBins;
        double[] readings = [.. signal.Axis.Points.Select(p => 1e-6 * p)], live = signal.Live, net = signal.NetPerShot(), error = signal.NetError();
        // bins of one point are weighted alike: the sum over arrival times of counts a shot
        double[] Summed(double[] bins) => [.. Enumerable.Range(0, readings.Length).Select(p => bins.AsSpan(p * times, times).ToArray().Sum())];
        double[] y = Summed(net), sigma = [.. Enumerable.Range(0, readings.Length).Select(p => Math.Sqrt(error.AsSpan(p * times, times).ToArray().Sum(e => e * e)))];
        double[]? fit = c.Fit.Spectra.Count > 0 ? Summed(c.Fit.Spectra[0].Refolded) : c.Fit.Fitted is { } fitted ? Summed(fitted) : null;
        double[]? predicted = c.Prediction is { } p ? Summed(p.Signal) : null, noise = c.Prediction is { } q ? [.. Summed(q.Variance).Select(Math.Sqrt)] : null;
        double room = 0.03 * (readings.Max() - readings.Min());
        bool modelled = (fit ?? predicted) is not null;
        SvgFigure figure = new SvgFigure($"Signal of condition {c.Name} against the laser's reading", (readings.Min() - room, readings.Max() + room), "laser reading (MHz)")
            .Panel(270, Axis.Around([0, .. y.Zip(sigma, (a, s) => a + s), .. fit ?? [], .. predicted ?? []]), "counts per shot", last: !modelled).Points(readings, y, sigma);
        if (predicted is not null)
            figure.Band("simulated", Edges(readings), [.. predicted.Zip(noise!, (p, n) => p - n)], [.. predicted.Zip(noise!, (p, n) => p + n)]).Line("prediction", readings, predicted);
        if (fit is not null) figure.Line("fit", readings, fit);
        if ((fit ?? predicted) is { } model)
        {
            double[] pulls = [.. y.Select((n, p) => (n - model[p]) / sigma[p])];
            double most = Math.Clamp(pulls.Where(double.IsFinite).Select(Math.Abs).DefaultIfEmpty(3).Max() * 1.08, 3.5, 12);
            figure.Panel(110, (-most, most), "residual (σ)", last: true).Points(readings, [.. pulls.Select(x => Math.Clamp(x, -most, most))], null);
        }
        return figure.Draw();
    }

    /// <summary>Halfway between readings, and as far beyond the outer ones.</summary>
    static double[] Edges(double[] readings)
    {
        double[] middles = [.. readings.Zip(readings.Skip(1), (a, b) => 0.5 * (a + b))];
        return [2 * readings[0] - middles[0], .. middles, 2 * readings[^1] - middles[^1]];
    }
}
