using System.Globalization;
using System.Text;
using Pipeline.Analysis;
using Pipeline.Fitting;
using Pipeline.Hdf5;
using Pipeline.Reduction;

namespace Pipeline.Results;

/// <summary>spectrum.csv, signal.csv and spectrum.h5.</summary>
static class SpectrumFiles
{
    /// <summary>One row a velocity cell. Refolded: the fitted spectrum sent through instrument and estimator again; where it differs from
    /// the density, smoothing has changed the spectrum.</summary>
    public static string SpectrumCsv(RunOutcome run)
    {
        var text = new StringBuilder("condition,estimator,low_m_per_s,high_m_per_s,density_per_shot_s_per_m,statistical,systematic,refolded_density_per_shot_s_per_m,predicted_density_per_shot_s_per_m\n");
        foreach (ConditionOutcome c in run.Conditions)
            foreach (VelocitySpectrum s in c.Fit.Spectra)
            {
                double[] again = Again(s);
                for (int k = 0; k < s.Grid.Cells; k++)
                    Row(text, [c.Name, s.Estimator], s.Grid.Edge(k), s.Grid.Edge(k + 1), s.Molecules[k] / s.Grid.Step, s.Statistical[k] / s.Grid.Step,
                        s.Systematic[k] / s.Grid.Step, again[k] / s.Grid.Step, c.Prediction is { } p ? p.Spectrum[k] / s.Grid.Step : double.NaN);
            }
        return text.ToString();
    }

    /// <summary>One row a time bin: what was measured, what the fit and the prediction say of it. Counts a shot, dead time undone.</summary>
    public static string SignalCsv(RunOutcome run)
    {
        var text = new StringBuilder("condition,low_s,high_s,net_counts_per_shot,error,background_counts_per_shot,refolded_fit_counts_per_shot,predicted_counts_per_shot,prediction_error,laser_reading_hz\n");
        foreach (ConditionOutcome c in run.Conditions)
        {
            SignalAxis axis = c.Fit.Signal.Axis;
            double[] net = c.Fit.Signal.NetPerShot(), error = c.Fit.Signal.NetError();
            for (int i = 0; i < axis.Bins; i++)
                Row(text, [c.Name], axis.StartSeconds(i), axis.EndSeconds(i), net[i], error[i],
                    c.Fit.Signal.Background[i] / (c.Fit.Signal.Live[i] * c.Fit.Signal.Shots), Fit(c)?[i] ?? double.NaN,
                    c.Prediction?.Signal[i] ?? double.NaN, c.Prediction is { } p ? Math.Sqrt(p.Variance[i]) : double.NaN, axis.Points.Count > 0 ? axis.Points[i / axis.TimeBins] : double.NaN);
        }
        return text.ToString();
    }

    /// <summary>Groups with NXdata attributes (NeXus, an open standard), one a condition and estimator.</summary>
    public static Hdf5Tree SpectrumHdf5(RunOutcome run)
    {
        var root = new Hdf5Tree().Attribute("NX_class", "NXroot");
        Hdf5Tree entry = root.Group("entry").Attribute("NX_class", "NXentry");
        root.Attribute("default", "entry");
        foreach (ConditionOutcome c in run.Conditions)
        {
            Signal(entry.Group($"signal_{Safe(c.Name)}"), c);
            foreach (VelocitySpectrum s in c.Fit.Spectra) Spectrum(entry.Group($"spectrum_{Safe(c.Name)}_{s.Estimator}"), s);
        }
        if (run.Conditions.FirstOrDefault(c => c.Fit.Spectra.Count > 0) is { } first)
            entry.Attribute("default", $"spectrum_{Safe(first.Name)}_{first.Fit.Spectra[0].Estimator}");
        return root;
    }

    static void Spectrum(Hdf5Tree group, VelocitySpectrum s)
    {
        double[] total = [.. s.Statistical.Zip(s.Systematic, (a, b) => double.Hypot(a, b) / s.Grid.Step)];
        group.Attribute("NX_class", "NXdata").Attribute("signal", "density").Attribute("axes", new[] { "velocity" });
        group.Dataset("velocity", s.Grid.Edges(), ("units", "m/s"), ("long_name", "velocity (m/s)"));
        group.Dataset("density", s.Molecules.Select(m => m / s.Grid.Step).ToArray(), ("units", "s/m"), ("long_name", "molecules per shot per m/s"));
        group.Dataset("density_errors", total, ("units", "s/m"));
        group.Dataset("statistical", s.Statistical.Select(m => m / s.Grid.Step).ToArray(), ("units", "s/m"));
        group.Dataset("systematic", s.Systematic.Select(m => m / s.Grid.Step).ToArray(), ("units", "s/m"));
        if (s.Resolution is not { } resolution) return;
        var matrix = new double[resolution.Length, resolution.Length];
        for (int a = 0; a < resolution.Length; a++) for (int b = 0; b < resolution.Length; b++) matrix[a, b] = resolution[a][b];
        group.Dataset("resolution", matrix, ("long_name", "row: cell of this spectrum, column: cell of the truth"));
    }

    static void Signal(Hdf5Tree group, ConditionOutcome c)
    {
        SignalAxis axis = c.Fit.Signal.Axis;
        string[] axes = axis.Points.Count == 0 ? ["time"] : axis.TimeBins == 1 ? ["laser_reading"] : ["laser_reading", "time"];
        group.Attribute("NX_class", "NXdata").Attribute("signal", "net").Attribute("axes", axes);
        group.Dataset("time", axis.EdgesInSeconds(), ("units", "s"), ("long_name", "time after trigger (s)"));
        if (axis.Points.Count > 0) group.Dataset("laser_reading", axis.Points.ToArray(), ("units", "Hz"), ("long_name", "laser reading (Hz)"));
        group.Dataset("net", Shaped(axis, c.Fit.Signal.NetPerShot()), ("units", "count"), ("long_name", "counts per shot in the bin"));
        group.Dataset("net_errors", Shaped(axis, c.Fit.Signal.NetError()), ("units", "count"));
        if (Fit(c) is { } fit) group.Dataset("refolded_fit", Shaped(axis, fit), ("units", "count"));
        if (c.Prediction is { } p) group.Dataset("prediction", p.Signal, ("units", "count"));
    }

    static double[]? Fit(ConditionOutcome c) => c.Fit.Spectra.Count > 0 ? c.Fit.Spectra[0].Refolded : c.Fit.Fitted;

    /// <summary>[points, times] for a map, [bins] else.</summary>
    static Array Shaped(SignalAxis axis, double[] bins)
    {
        if (axis.Points.Count == 0 || axis.TimeBins == 1) return bins;
        var map = new double[axis.Points.Count, axis.TimeBins];
        Buffer.BlockCopy(bins, 0, map, 0, bins.Length * sizeof(double));
        return map;
    }

    static double[] Again(VelocitySpectrum s) => s.Resolution is { } r
        ? [.. r.Select(row => row.Zip(s.Molecules, (a, m) => a * m).Sum())] : [.. s.Molecules];

    /// <summary>A link name of HDF5 holds no '/'.</summary>
    static string Safe(string name) => name.Replace('/', '_').Replace('.', '_');

    static void Row(StringBuilder text, string[] labels, params ReadOnlySpan<double> numbers)
    {
        text.AppendJoin(',', labels.Select(Csv.Field));
        foreach (double n in numbers) text.Append(',').Append(double.IsFinite(n) ? n.ToString("G9", CultureInfo.InvariantCulture) : "");
        text.Append('\n');
    }
}

/// <summary>Text in CSV fields.</summary>
static class Csv
{
    /// <summary>Quoted where RFC 4180 asks for it.</summary>
    public static string Field(string text) =>
        text.AsSpan().IndexOfAny(",\"\r\n") < 0 ? text : $"\"{text.Replace("\"", "\"\"", StringComparison.Ordinal)}\"";
}
