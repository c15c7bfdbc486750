namespace Pipeline.Comparison;

/// <summary>Bins taken together, chosen on the prediction alone: groups hold equal shares of the predicted signal.</summary>
static class MergedBins
{
    /// <summary>At least so many counts in a group, and so many groups.</summary>
    const int MostGroups = 30, CountsEach = 25, FewestGroups = 4;

    /// <param name="predicted">[bins] counts.</param>
    /// <param name="timeBins">Time bins of each point of a map, which is cut in both directions; 1 elsewhere.</param>
    /// <returns>[bins] number of the group, from 0 without gaps.</returns>
    public static int[] Of(double[] predicted, int timeBins)
    {
        int groups = Math.Clamp((int)(predicted.Sum() / CountsEach), FewestGroups, MostGroups);
        return timeBins == 1 ? Cut(predicted, groups) : Map(predicted, timeBins, groups);
    }

    /// <summary>Strips of neighbouring points, each cut along its own times.</summary>
    static int[] Map(double[] predicted, int timeBins, int groups)
    {
        int points = predicted.Length / timeBins, across = (int)Math.Ceiling(Math.Sqrt(groups)), along = groups / across;
        double At(int point, int time) => predicted[point * timeBins + time];
        int[] strips = Cut([.. Enumerable.Range(0, points).Select(p => Enumerable.Range(0, timeBins).Sum(t => At(p, t)))], across);
        int[][] times = [.. Enumerable.Range(0, strips[^1] + 1).Select(s => Cut([.. Enumerable.Range(0, timeBins).Select(t =>
            Enumerable.Range(0, points).Where(p => strips[p] == s).Sum(p => At(p, t)))], along))];
        int[] first = [.. times.Select((_, s) => times.Take(s).Sum(t => t[^1] + 1))];
        return [.. Enumerable.Range(0, predicted.Length).Select(i => first[strips[i / timeBins]] + times[strips[i / timeBins]][i % timeBins])];
    }

    /// <summary>Neighbours together until each part has its share.</summary>
    static int[] Cut(double[] weights, int parts)
    {
        double all = weights.Sum(), sum = 0;
        var part = new int[weights.Length];
        for (int i = 0; i < weights.Length - 1; i++)
        {
            sum += weights[i];
            part[i + 1] = sum >= all * (part[i] + 1) / parts && part[i] + 1 < parts ? part[i] + 1 : part[i];
        }
        return part;
    }
}
