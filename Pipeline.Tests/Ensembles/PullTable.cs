using Pipeline.Fitting;
using Xunit.Abstractions;

namespace Pipeline.Tests.Ensembles;

/// <summary>Pulls of an ensemble, (found - true) / error, by quantity. Bar: mean below 0.2, width within 0.1 of one, 63 to 73 % within one.</summary>
sealed class PullTable(ITestOutputHelper output, string title)
{
    /// <summary>Share of a normal distribution within one standard deviation.</summary>
    const double WithinOne = 0.6827;
    readonly Dictionary<string, List<double>> _pulls = [];
    readonly Dictionary<string, List<double>> _errors = [];
    readonly Dictionary<string, int> _undetermined = [];

    /// <summary>A quantity whose every uncertain fact is drawn in every run: its total error counts.</summary>
    public void Add(string name, Quantity found, double truth) => Add(name, found, truth, found.Total);

    public void Add(string name, Quantity found, double truth, double error)
    {
        if (!_pulls.ContainsKey(name)) (_pulls[name], _errors[name], _undetermined[name]) = ([], [], 0);
        if (found.NotDeterminedBecause is not null)
        {
            _undetermined[name]++;
            return;
        }
        _pulls[name].Add((found.Value - truth) / error);
        _errors[name].Add(error / truth);
    }

    /// <summary>Number, mean and spread of one fit.</summary>
    public void Add(string name, SpectrumOutcome found, SampleDay.Truth truth)
    {
        Add($"{name} number", found.Number, truth.Molecules);
        Add($"{name} mean velocity", found.Mean, truth.MeanSpeed);
        Add($"{name} spread", found.Spread, truth.Spread);
    }

    /// <summary>Four standard errors of an ensemble of this size about a normal distribution; what is known to fall short is allowed for by name.</summary>
    /// <param name="known">Measured shortfalls: mean pull and width of a quantity in place of 0 and 1, and whether runs may have no answer.</param>
    public void Check(params (string Name, double Mean, double Width, bool Gaps)[] known)
    {
        foreach ((string name, List<double> pulls) in _pulls) output.WriteLine($"{title}, {name}: {Line(pulls)}; error {100 * _errors[name].DefaultIfEmpty(double.NaN).Average():F1} %, {_undetermined[name]} not determined");
        foreach (var k in known) Assert.Contains(k.Name, _pulls.Keys);
        foreach ((string name, List<double> pulls) in _pulls)
        {
            (double mean, double width, bool gaps) = known.Where(k => k.Name == name).Select(k => (k.Mean, k.Width, k.Gaps)).DefaultIfEmpty((0, 1, false)).Single();
            // the runs that are left would be a choice
            Assert.True(gaps || _undetermined[name] == 0, $"{title}, {name}: not determined in {_undetermined[name]} runs");
            if (pulls.Count > 2) Check($"{title}, {name}", pulls, mean, width);
        }
    }

    static void Check(string name, List<double> pulls, double mean, double width)
    {
        double n = pulls.Count, found = pulls.Average(), wide = Width(pulls);
        // beyond 400 runs the bar itself
        double margin = Math.Max(0.2, 4 / Math.Sqrt(n)) * width;
        Assert.True(Math.Abs(found - mean) <= margin, $"{name}: mean pull {found:F2}, expected {mean} within {margin:F2}");
        double spread = Math.Max(0.1, 4 / Math.Sqrt(2 * n)) * width;
        Assert.True(Math.Abs(wide - width) <= spread, $"{name}: width {wide:F2}, expected {width} within {spread:F2}");
        double within = Covered(mean, width), covered = pulls.Count(p => Math.Abs(p) < 1) / n, chance = Math.Max(0.05, 4 * Math.Sqrt(within * (1 - within) / n));
        Assert.True(Math.Abs(covered - within) <= chance, $"{name}: {covered:P0} within one error, expected {within:P0} within {chance:P0}");
    }

    /// <summary>Share of a normal distribution of this mean and width that lies within one.</summary>
    static double Covered(double mean, double width) => mean == 0 && width == 1 ? WithinOne
        : MathNet.Numerics.Distributions.Normal.CDF(mean, width, 1) - MathNet.Numerics.Distributions.Normal.CDF(mean, width, -1);

    static string Line(List<double> pulls) => $"mean pull {pulls.DefaultIfEmpty(double.NaN).Average():F2}, width {Width(pulls):F2}, {pulls.Count(p => Math.Abs(p) < 1)} of {pulls.Count} within one";

    static double Width(List<double> pulls)
    {
        double mean = pulls.DefaultIfEmpty(double.NaN).Average();
        return Math.Sqrt(pulls.Sum(p => (p - mean) * (p - mean)) / (pulls.Count - 1));
    }
}
